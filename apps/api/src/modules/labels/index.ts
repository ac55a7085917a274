export { labelsRouter } from './labels.router.js'
