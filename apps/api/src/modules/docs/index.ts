export { docsRouter } from './docs.router.js'
export { DOCUMENTED_ROUTES } from './routes.js'
