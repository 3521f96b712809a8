import { describe, expect, it } from 'vitest'
import { routeTable } from '../../server/app.ts'
import { Budget } from '../../server/http/budget.ts'
import { machines } from '../modules/people/read-back.ts'
import { aWorkplace, password } from '../support/workplace.ts'

const at = (seconds: number) => new Date(1_800_000_000_000 + seconds * 1000)

describe('a budget', () => {
  it('is each person\'s own, and begins anew when its time is over or the clock went backwards', () => {
    const budget = new Budget({ limit: 2, windowMs: 60_000 })
    const left = (person: number, seconds: number) => {
      try {
        budget.mustHaveLeft(person, at(seconds), 'Too much.')
        return true
      } catch {
        return false
      }
    }
    budget.spend(1, at(0))
    expect(left(1, 1)).toBe(true)
    budget.spend(1, at(30))
    expect(left(1, 59)).toBe(false)
    expect(left(2, 59)).toBe(true)
    expect(left(1, 60)).toBe(true)
    budget.spend(1, at(61))
    budget.spend(1, at(61))
    expect(left(1, 62)).toBe(false)
    expect(left(1, -500)).toBe(true)
  })
})

describe('costly routes', () => {
  it('are marked: whatever writes whole tables, makes archives, walks the ledger, compares or imports', () => {
    const heavy = routeTable.filter((r) => /\.(csv|jsonl|zip)$|\/verify$|\/compare$|\/import$|\/preview$|\/bulk$/.test(r.path) || (r.path === '/backups' && r.method === 'post'))
    expect(heavy.length).toBeGreaterThan(9)
    for (const r of heavy) expect(r.costly, `${r.method} ${r.path}`).toBe(true)
  })

  it('answer 429 with the time to wait once a person spent the budget; others and other routes go on', async () => {
    const w = await aWorkplace({ DETENT_COSTLY_PER_MINUTE: '3' })
    await machines(w)
    const yuna = await w.as('observer')
    const other = await w.as('observer')
    for (let i = 0; i < 3; i += 1) await yuna.get('/api/ledger/verify').expect(200)
    const { body, headers } = await yuna.get('/api/ledger/export.csv').expect(429)
    expect(body).toMatchObject({ type: '/problems/too-many-requests', status: 429, detail: expect.stringContaining('wait 60 s') })
    expect(headers['retry-after']).toBe('60')
    await yuna.get('/api/ledger').expect(200)
    await other.get('/api/ledger/verify').expect(200)
    w.at(new Date(w.services.now().getTime() + 60_000))
    await yuna.get('/api/ledger/verify').expect(200)
  })
})

describe('passwords asked again of who is signed in', () => {
  const asking = routeTable.filter((r) => r.body && ['password', 'current', 'code'].some((name) => name in (r.body!.properties as object)))
  it('are asked by every act that signs, publishes, makes keys or alters how one signs in', () => {
    expect(asking.map((r) => `${r.method} ${r.path}`).sort()).toEqual(
      [
        'post /account/bench-keys', 'post /account/code', 'post /account/password', 'post /account/recovery-codes', 'post /account/second-factor', 'post /account/second-factor/confirm', 'post /account/second-factor/remove',
        'post /changes/:change/release', 'post /changes/:change/sign', 'post /firmware/:line/:version/publish', 'post /firmware/:line/:version/retire', 'post /keys/rotate', 'post /machines/:machine/policy/:number/sign',
      ].sort(),
    )
  })

  it('are not guessed through a stolen session: ten wrong ones, whichever act they were tried on, then none for a quarter of an hour', async () => {
    const w = await aWorkplace()
    const silvan = await w.as([['administrator', null], ['builder', null]])
    for (let i = 0; i < 5; i += 1) {
      await silvan.post('/api/account/password', { current: `guess number ${i} of many`, next: 'another long password' }).expect(403)
      await silvan.post('/api/account/second-factor', { password: `guess number ${i} of many` }).expect(403)
    }
    await silvan.post('/api/account/password', { current: password, next: 'another long password' }).expect(429)
    w.at(new Date(w.services.now().getTime() + 15 * 60_000))
    await silvan.post('/api/account/password', { current: password, next: 'another long password' }).expect(200)
  })
})
