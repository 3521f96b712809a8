import { readFile } from 'node:fs/promises'
import { join } from 'node:path'
import { promisify } from 'node:util'
import { gzip } from 'node:zlib'
import express, { Router, type RequestHandler } from 'express'

const compress = promisify(gzip)
const types: Record<string, string> = { js: 'text/javascript; charset=utf-8', css: 'text/css; charset=utf-8' }

/**
 * Scripts and styles compressed, each once: their names hold their hash, so what is kept is never stale. A browser that takes no gzip,
 * and whatever else is asked for, is left to the next handler.
 */
function compressed(folder: string): RequestHandler {
  const kept = new Map<string, Promise<Buffer>>()
  return (req, res, next) => {
    const [, name, ending] = /^\/([\w.-]+\.(js|css))$/.exec(req.path) ?? []
    if (!name || req.method !== 'GET' || !req.acceptsEncodings('gzip')) return next()
    const bytes = kept.get(name) ?? readFile(join(folder, name)).then((b) => compress(b, { level: 9 }))
    kept.set(name, bytes)
    bytes.then(
      (b) => res.set({ 'Content-Type': types[ending], 'Content-Encoding': 'gzip', Vary: 'Accept-Encoding', 'Cache-Control': 'public, max-age=31536000, immutable' }).end(b),
      () => {
        // Not there: the next handler answers it, and it is looked for again another time.
        kept.delete(name)
        next()
      },
    )
  }
}

/** The built client: hashed assets for a year, the page itself afresh, and the page for every address that is a screen. */
export function serveClient(folder: string): Router {
  const router = Router()
  router.use('/assets', compressed(join(folder, 'assets')), express.static(join(folder, 'assets'), { immutable: true, maxAge: '1y', index: false, fallthrough: false }))
  router.use(express.static(folder, { index: false, maxAge: 0 }))
  router.get('/{*path}', (req, res, next) => {
    if (!req.accepts('html')) return next()
    res.set('Cache-Control', 'no-cache').sendFile('index.html', { root: folder })
  })
  return router
}
