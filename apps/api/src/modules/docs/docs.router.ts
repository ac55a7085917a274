import { Router } from 'express'
import { docsPage } from './docs-page.js'
import { openApiDocument } from './openapi.js'

/** `GET /api/v1/openapi.json` and `GET /api/docs`. They say nothing that the program text does not. */
export function docsRouter(): Router {
  const document = openApiDocument()
  const text = JSON.stringify(document)
  const page = docsPage(document)
  const router = Router()
  router.get('/api/v1/openapi.json', (_req, res) => {
    res.type('application/json').send(text)
  })
  router.get('/api/docs', (_req, res) => {
    res.type('html').send(page)
  })
  return router
}
