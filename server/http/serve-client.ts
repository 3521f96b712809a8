import { readFile } from 'node:fs/promises'
import { join } from 'node:path'
import { promisify } from 'node:util'
import { brotliCompress, constants, gzip } from 'node:zlib'
import express, { Router, type RequestHandler } from 'express'

const [gzipped, brotlied] = [promisify(gzip), promisify(brotliCompress)]
/** A large file's last percent costs seconds of a processor; the editor's is one. */
const quality = (bytes: Buffer) => (bytes.length > 600_000 ? 6 : constants.BROTLI_MAX_QUALITY)
const encodings = {
  br: (bytes: Buffer) => brotlied(bytes, { params: { [constants.BROTLI_PARAM_QUALITY]: quality(bytes), [constants.BROTLI_PARAM_SIZE_HINT]: bytes.length } }),
  gzip: (bytes: Buffer) => gzipped(bytes, { level: 9 }),
}
const types: Record<string, string> = { js: 'text/javascript; charset=utf-8', css: 'text/css; charset=utf-8' }

/**
 * Scripts and styles compressed, each once: their names hold their hash, so what is kept is never stale. A browser that takes neither
 * Brotli nor gzip, and whatever else is asked for, is left to the next handler.
 */
function compressed(folder: string): RequestHandler {
  const kept = new Map<string, Promise<Buffer>>()
  return (req, res, next) => {
    const [, name, ending] = /^\/([\w.-]+\.(js|css))$/.exec(req.path) ?? []
    const encoding = (['br', 'gzip'] as const).find((e) => req.acceptsEncodings(e))
    if (!name || req.method !== 'GET' || !encoding) return next()
    const key = `${encoding} ${name}`
    const bytes = kept.get(key) ?? readFile(join(folder, name)).then(encodings[encoding])
    kept.set(key, bytes)
    bytes.then(
      (b) => res.set({ 'Content-Type': types[ending], 'Content-Encoding': encoding, Vary: 'Accept-Encoding', 'Cache-Control': 'public, max-age=31536000, immutable' }).end(b),
      () => {
        // Not there: the next handler answers it, and it is looked for again another time.
        kept.delete(key)
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
