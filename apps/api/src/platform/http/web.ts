import { join, resolve } from 'node:path'
import express, { Router } from 'express'
import { Problem } from './problem.js'

/** What is never a page of the web application. */
const NOT_PAGES = /^\/(api|fhir|metrics|socket\.io|assets)(\/|$)/

/**
 * The built web application. Files under `assets/` bear a hash of their content in their name and are kept for
 * ever; every other path of a browser is a page of the application, which finds its own way.
 */
export function webRouter(folder: string): Router {
  const root = resolve(folder)
  const router = Router()
  router.use(
    '/assets',
    express.static(join(root, 'assets'), { immutable: true, maxAge: '365d', index: false, redirect: false }),
  )
  router.use(express.static(root, { index: false, redirect: false, setHeaders: askEachTime }))
  router.get('/{*page}', (req, res, next) => {
    if (NOT_PAGES.test(req.path) || !req.accepts('html')) {
      next()
      return
    }
    askEachTime(res)
    res.sendFile('index.html', { root }, (error) => {
      if (error) next(new Problem('not-found', { cause: error }))
    })
  })
  return router
}

const askEachTime = (res: { setHeader(name: string, value: string): unknown }): void => {
  res.setHeader('Cache-Control', 'no-cache')
}
