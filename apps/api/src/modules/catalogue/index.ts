export { sizesRouter } from './sizes.router.js'
