import { mkdirSync, mkdtempSync, writeFileSync } from 'node:fs'
import { createServer, get } from 'node:http'
import type { AddressInfo } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { brotliDecompressSync } from 'node:zlib'
import express from 'express'
import supertest from 'supertest'
import { describe, expect, it } from 'vitest'
import { serveClient } from '../../server/http/serve-client.ts'

const folder = mkdtempSync(join(tmpdir(), 'detent-client-'))
mkdirSync(join(folder, 'assets'))
const script = `export const words = '${'detent '.repeat(2000)}'`
writeFileSync(join(folder, 'assets', 'desk-1a2b.js'), script)
writeFileSync(join(folder, 'assets', 'fira-1a2b.woff2'), 'font')
writeFileSync(join(folder, 'index.html'), '<!doctype html><title>Detent</title>')
const app = express().use(serveClient(folder))

describe('the client’s files', () => {
  it('are sent compressed to whoever takes that, and are kept for a year', async () => {
    const { headers, text } = await supertest(app).get('/assets/desk-1a2b.js').set('Accept-Encoding', 'gzip').expect(200)
    expect(headers).toMatchObject({ 'content-encoding': 'gzip', vary: 'Accept-Encoding', 'content-type': 'text/javascript; charset=utf-8', 'cache-control': 'public, max-age=31536000, immutable' })
    expect(text).toBe(script)
  })

  it('are sent in Brotli to whoever takes that too', async () => {
    const server = createServer(app).listen(0)
    try {
      const { port } = server.address() as AddressInfo
      const { encoding, bytes } = await new Promise<{ encoding: string | undefined; bytes: Buffer }>((done, fail) => {
        get({ port, path: '/assets/desk-1a2b.js', headers: { 'Accept-Encoding': 'gzip, br' } }, (res) => {
          const parts: Buffer[] = []
          res.on('data', (part: Buffer) => parts.push(part))
          res.on('end', () => done({ encoding: res.headers['content-encoding'], bytes: Buffer.concat(parts) }))
        }).on('error', fail)
      })
      expect(encoding).toBe('br')
      expect(String(brotliDecompressSync(bytes))).toBe(script)
    } finally {
      server.close()
    }
  })

  it('are sent as they are to whoever does not, and where they are compressed already', async () => {
    const plain = await supertest(app).get('/assets/desk-1a2b.js').set('Accept-Encoding', 'identity').expect(200)
    expect([plain.headers['content-encoding'], plain.text]).toEqual([undefined, script])
    const font = await supertest(app).get('/assets/fira-1a2b.woff2').set('Accept-Encoding', 'gzip').expect(200)
    expect(font.headers['content-encoding']).toBeUndefined()
  })

  it('are looked for in their folder only', async () => {
    await supertest(app).get('/assets/nothing.js').set('Accept-Encoding', 'gzip').expect(404)
    await supertest(app).get('/assets/..%2findex.html').set('Accept-Encoding', 'gzip').expect(403)
    expect((await supertest(app).get('/changes/dunlin-1').set('Accept', 'text/html').expect(200)).text).toContain('Detent')
  })
})
