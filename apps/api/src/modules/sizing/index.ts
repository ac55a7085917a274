export { sizingRouter } from './sizing.router.js'
