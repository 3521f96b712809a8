// @vitest-environment jsdom
import './setup-dom.ts'
import { describe, expect, it, vi } from 'vitest'
import { act, ApiProblem, fieldError, get, onSignedOut, setActToken, withQuery } from '../../src/lib/api-client.ts'
import { fakeServer, notSignedIn, problem } from './fake-server.ts'

const noAnswer = () => {
  throw new TypeError('network down')
}

describe('acts', () => {
  it('carry the token, a key, and the revision they were decided on', async () => {
    const server = fakeServer({ 'PATCH /changes/dunlin-47': { ok: true } })
    setActToken('my token')
    await act({ method: 'PATCH', path: '/changes/dunlin-47', body: { title: 'Softer' }, ifMatch: 3 })
    const [one] = server.asked
    expect(one.body).toEqual({ title: 'Softer' })
    expect(one.headers).toMatchObject({ 'X-Detent-Token': 'my token', 'If-Match': '"3"', 'Content-Type': 'application/json' })
    expect(one.headers['Idempotency-Key']).toMatch(/^[\w-]{8,80}$/)
  })

  it('keep their key while the outcome is unknown, and only then', async () => {
    const replies: Record<string, unknown> = { 'POST /changes': noAnswer }
    const server = fakeServer(replies)
    const draft = () => act({ path: '/changes', body: { title: 'Softer' } })
    await expect(draft()).rejects.toMatchObject({ code: 'network', status: 0 })
    replies['POST /changes'] = problem(500, 'unexpected', 'Something failed.')
    await expect(draft()).rejects.toMatchObject({ code: 'unexpected' })
    replies['POST /changes'] = problem(409, 'wrong-state', 'Not now.')
    await expect(draft()).rejects.toMatchObject({ code: 'wrong-state' })
    replies['POST /changes'] = { key: 'dunlin-48' }
    await draft()
    await draft()
    const keys = server.asked.map((a) => a.headers['Idempotency-Key'])
    expect(keys[1]).toBe(keys[0])
    expect(keys[2]).toBe(keys[0])
    // Refused and answered acts are over: the next is another intent.
    expect(new Set(keys.slice(2)).size).toBe(3)
  })

  it('of another body are another intent', async () => {
    const server = fakeServer({ 'POST /changes': noAnswer })
    await expect(act({ path: '/changes', body: { title: 'a' } })).rejects.toThrow()
    await expect(act({ path: '/changes', body: { title: 'b' } })).rejects.toThrow()
    expect(server.asked[0].headers['Idempotency-Key']).not.toBe(server.asked[1].headers['Idempotency-Key'])
  })
})

describe('refusals', () => {
  it('are read from the problem document, with what belongs to this kind alone', async () => {
    fakeServer({ 'GET /changes/x': problem(409, 'value-conflict', 'Another value was saved.', { errors: [{ pointer: '/title', detail: 'is too long' }], conflicts: [{ pointer: '/a' }] }) })
    const refusal = await get('/changes/x').catch((e: unknown) => e)
    expect(refusal).toBeInstanceOf(ApiProblem)
    expect(refusal).toMatchObject({ code: 'value-conflict', status: 409, detail: 'Another value was saved.', extra: { conflicts: [{ pointer: '/a' }] } })
    expect((refusal as ApiProblem).extra).not.toHaveProperty('type')
    expect(fieldError(refusal, '/title')).toBe('is too long')
    expect(fieldError(refusal, '/reason')).toBeNull()
  })

  it('without a problem document still say what to do', async () => {
    vi.stubGlobal('fetch', async () => new Response('<html>bad gateway</html>', { status: 502 }))
    await expect(get('/me')).rejects.toMatchObject({ code: 'unexpected', status: 502, detail: expect.stringContaining('try again') })
  })

  it('tell once the session is gone, until nobody listens', async () => {
    fakeServer({ 'GET /me': notSignedIn, 'GET /machines': problem(403, 'not-permitted', 'No.') })
    const told = vi.fn()
    const stop = onSignedOut(told)
    await expect(get('/machines')).rejects.toThrow()
    expect(told).not.toHaveBeenCalled()
    await expect(get('/me')).rejects.toThrow()
    expect(told).toHaveBeenCalledTimes(1)
    stop()
    await expect(get('/me')).rejects.toThrow()
    expect(told).toHaveBeenCalledTimes(1)
  })
})

describe('addresses', () => {
  it('leave out what is not asked and make the rest safe', () => {
    expect(withQuery('/ledger', { act: 'change drafted', machine: '', before: null, person: undefined })).toBe('/ledger?act=change+drafted')
    expect(withQuery('/ledger', { act: '' })).toBe('/ledger')
    expect(withQuery('/releases', { machine: 'a&b=c' })).toBe('/releases?machine=a%26b%3Dc')
  })
})
