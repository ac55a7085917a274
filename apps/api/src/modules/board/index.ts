export { boardRouter } from './board.router.js'
export { BoardService } from './board.service.js'
