export { casesRouter } from './cases.router.js'
export { CasesService } from './cases.service.js'
