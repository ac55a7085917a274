export { Room } from './room.entity.js'
export { roomsRouter } from './rooms.router.js'
