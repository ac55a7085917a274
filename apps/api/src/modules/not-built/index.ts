export { notBuiltRouter } from './not-built.router.js'
export { LATER_FHIR_ROUTES, LATER_ROUTES, type LaterRoute } from './routes.js'
