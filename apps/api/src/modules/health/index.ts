export { healthRouter } from './health.router.js'
