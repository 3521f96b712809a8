import { describe, expect, it } from 'vitest'
import { Receipt } from '../../server/http/receipt.entity.ts'
import { RoleGrant } from '../../server/modules/people/role-grant.entity.ts'
import { aMachine } from '../support/a-release.ts'
import { aWorkplace, password } from '../support/workplace.ts'

describe('an act', () => {
  it('refuses characters that text can not keep, in bodies and addresses alike', async () => {
    const w = await aWorkplace()
    const silvan = await w.as('administrator')
    for (const name of ['a\u0000b', 'a\ud800b', '\udc00'])
      expect((await silvan.post('/api/machines', { key: 'heron', name, description: '' }).expect(400)).body.errors).toEqual([{ pointer: '/name', detail: expect.stringContaining("can't keep") }])
    await silvan.get('/api/machines/dunlin%00/policy').expect(400)
    await silvan.get('/api/ledger?act=a%00b').expect(400)
    await silvan.get('/api/ledger?act=a&act=b').expect(400)
  })

  it('takes no harm from a deep body on a route that wants none', async () => {
    const w = await aWorkplace()
    await aMachine(w)
    const mirela = await w.as('controls engineer')
    const { key } = (await mirela.post('/api/changes', { machine: 'dunlin', title: 'Deep' }).expect(201)).body as { key: string }
    const deep = '{"a":'.repeat(5000) + '1' + '}'.repeat(5000)
    const answer = await mirela.post(`/api/changes/${key}/submit`).set('Content-Type', 'application/json').set('Idempotency-Key', 'deep-body-key').set('If-Match', '"1"').send(deep)
    expect(answer.status).toBeLessThan(500)
  })

  it('keeps no fast hash of a password: two receipts that differ in it alone are the same', async () => {
    const w = await aWorkplace()
    const mirela = await w.as('controls engineer')
    const change = (next: string, key: string) => mirela.post('/api/account/password', { current: password, next }).set('Idempotency-Key', key)
    await change('another long password', 'first-password-key').expect(200)
    const em = w.orm.em.fork()
    const [first] = await em.find(Receipt, {})
    const again = await w.signIn(await em.findOneOrFail((await import('../../server/modules/people/person.entity.ts')).Person, { id: mirela.me.id })).catch(() => null)
    expect(again).toBeNull()
    expect(first.body).not.toContain('another long password')
    const { createHash } = await import('node:crypto')
    const { default: canonicalize } = await import('canonicalize')
    const withoutSecrets = createHash('sha256').update(canonicalize({ method: 'POST', path: '/api/account/password', body: {} })!).digest('hex')
    expect(first.requestHash).toBe(withoutSecrets)
  })

  it('asks for the role again inside its transaction: one ended meanwhile stops it', async () => {
    const w = await aWorkplace()
    await aMachine(w)
    const mirela = await w.as('controls engineer')
    let ended = false
    // the role ends between the first question and the transaction
    const { key } = (await mirela.post('/api/changes', { machine: 'dunlin', title: 'Meanwhile' }).expect(201)).body as { key: string }
    const transactional = w.orm.em.constructor.prototype.transactional as (...args: unknown[]) => Promise<unknown>
    w.orm.em.constructor.prototype.transactional = async function (this: unknown, ...args: unknown[]) {
      if (!ended) {
        ended = true
        await w.orm.em.fork().nativeUpdate(RoleGrant, { person: mirela.me.id }, { endedAt: new Date() })
      }
      return transactional.apply(this, args)
    }
    try {
      await mirela.patch(`/api/changes/${key}`, { title: 'Later' }).set('If-Match', '"1"').expect(403)
    } finally {
      w.orm.em.constructor.prototype.transactional = transactional
    }
  })
})
