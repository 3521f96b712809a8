import { createHash } from 'node:crypto'
import type { Test } from 'supertest'

/** Takes a download's bytes as they come. */
export const asBytes = (test: Test): Test =>
  test.buffer().parse((res, done) => {
    const parts: Buffer[] = []
    res.on('data', (d: Buffer) => parts.push(d))
    res.on('end', () => done(null, Buffer.concat(parts)))
  })

export const shaOf = (bytes: Uint8Array | string) => createHash('sha256').update(bytes).digest('hex')

/** The file's name as a browser would save it. */
export const nameOf = (headers: Record<string, string>) => decodeURIComponent(/filename\*=UTF-8''([^;]+)/.exec(headers['content-disposition'])?.[1] ?? '')
