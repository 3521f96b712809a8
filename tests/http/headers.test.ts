import { describe, expect, it } from 'vitest'
import supertest from 'supertest'
import { aWorkplace } from '../support/workplace.ts'

const directives = (header: string) => Object.fromEntries(header.split(';').map((part) => part.trim().split(/ (.*)/s).slice(0, 2)) as [string, string][])

describe('security headers', () => {
  it.each([['an answer', '/api/workplace', 200], ['a refusal', '/api/me', 401], ['an address where nothing is', '/nothing', 404]] as const)('stand on %s', async (_what, path, status) => {
    const w = await aWorkplace()
    const { headers } = await supertest(w.app).get(path).expect(status)
    expect(directives(headers['content-security-policy'])).toEqual({
      'default-src': "'none'",
      'script-src': "'self'",
      'style-src': "'self' 'unsafe-inline'",
      'img-src': "'self' data:",
      'font-src': "'self'",
      'connect-src': "'self'",
      'worker-src': "'self'",
      'form-action': "'self'",
      'base-uri': "'none'",
      'object-src': "'none'",
      'frame-ancestors': "'none'",
    })
    expect(headers).toMatchObject({ 'x-content-type-options': 'nosniff', 'referrer-policy': 'same-origin' })
    expect(headers['x-powered-by']).toBeUndefined()
    expect(headers['strict-transport-security']).toBeUndefined()
    if (path.startsWith('/api')) expect(headers['cache-control']).toBe('no-store')
  })

  it('ask for TLS behind https alone', async () => {
    const w = await aWorkplace({ DETENT_BASE_URL: 'https://detent.dunlin.example' })
    expect((await supertest(w.app).get('/api/workplace')).headers['strict-transport-security']).toBe('max-age=31536000; includeSubDomains')
  })
})

describe('a session', () => {
  it('begins at sign-in and not before: reading sets no cookie', async () => {
    const w = await aWorkplace()
    for (const path of ['/api/workplace', '/api/me', '/nothing']) expect((await supertest(w.app).get(path)).headers['set-cookie']).toBeUndefined()
  })

  it('is not opened by a cookie of another making', async () => {
    const w = await aWorkplace()
    await w.as('administrator')
    for (const cookie of ['detent=s%3Aaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaa.bbbb', 'detent=1', 'detent=', `detent=s%3A${'x'.repeat(5000)}`, '__Host-detent=1']) await supertest(w.app).get('/api/me').set('Cookie', cookie).expect(401)
  })
})
