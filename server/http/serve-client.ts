import { join } from 'node:path'
import express, { Router } from 'express'

/** The built client: hashed assets for a year, the page itself afresh, and the page for every address that is a screen. */
export function serveClient(folder: string): Router {
  const router = Router()
  router.use('/assets', express.static(join(folder, 'assets'), { immutable: true, maxAge: '1y', index: false, fallthrough: false }))
  router.use(express.static(folder, { index: false, maxAge: 0 }))
  router.get('/{*path}', (req, res, next) => {
    if (!req.accepts('html')) return next()
    res.set('Cache-Control', 'no-cache').sendFile('index.html', { root: folder })
  })
  return router
}
