import { describe, expect, it } from 'vitest'
import { Receipt } from '../../server/http/receipt.entity.ts'
import { Machine } from '../../server/modules/machines/machine.entity.ts'
import { Mail } from '../../server/modules/mail/mail.entity.ts'
import { aWorkplace } from '../support/workplace.ts'
import { countEntries, machines } from '../modules/people/read-back.ts'

const key = 'heron-made-once'
const heron = { key: 'heron', name: 'Heron', description: 'A wading sampler.' }
const yuna = { name: 'Yuna Brandt', email: 'yuna.brandt@dunlin.example', roles: [] }

describe('the same request again', () => {
  it('gives the first answer and acts once', async () => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    const first = await admin.post('/api/people', yuna).set('Idempotency-Key', key).expect(201)
    const entries = await countEntries(w)
    w.at('2026-03-02T10:00:00Z')
    const again = await admin.post('/api/people', yuna).set('Idempotency-Key', key).expect(201)
    expect(again.body).toEqual(first.body)
    expect(await countEntries(w)).toBe(entries)
    expect(await w.orm.em.fork().count(Mail)).toBe(1)
    expect(await w.orm.em.fork().count(Receipt)).toBe(1)
  })

  it('acts once when both come at the same time', async () => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    const answers = await Promise.all([1, 2, 3].map(() => admin.post('/api/machines', heron).set('Idempotency-Key', key)))
    expect(answers.map((a) => a.status)).toEqual([201, 201, 201])
    expect(answers.map((a) => a.headers.etag)).toEqual([answers[0].headers.etag, answers[0].headers.etag, answers[0].headers.etag])
    expect(answers[1].body).toEqual(answers[0].body)
    expect(await w.orm.em.fork().count(Machine, { key: 'heron' })).toBe(1)
  })

  it('is refused by the state when it carries no key', async () => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    await admin.post('/api/machines', heron).expect(201)
    expect((await admin.post('/api/machines', heron).expect(409)).body.type).toBe('/problems/already-exists')
  })

  it('keeps no receipt of a refusal: the key is free for the corrected try', async () => {
    const w = await aWorkplace()
    await machines(w)
    const admin = await w.as('administrator')
    await admin.post('/api/machines', { ...heron, key: 'dunlin' }).set('Idempotency-Key', key).expect(409)
    expect(await w.orm.em.fork().count(Receipt)).toBe(0)
    await admin.post('/api/machines', heron).set('Idempotency-Key', key).expect(201)
  })

  it('rolls back whole when it fails half-way', async () => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    const entries = await countEntries(w)
    await w.orm.em.getConnection().execute('drop table receipt')
    await admin.post('/api/machines', heron).set('Idempotency-Key', key).expect(500)
    expect(await w.orm.em.fork().count(Machine)).toBe(0)
    expect(await countEntries(w)).toBe(entries)
  })
})

describe('a key used for something else', () => {
  it('is refused and does nothing: another body, another address, another method', async () => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    const { body } = await admin.post('/api/people', yuna).set('Idempotency-Key', key).expect(201)
    const entries = await countEntries(w)
    for (const other of [admin.post('/api/people', { ...yuna, name: 'Yuna B.' }), admin.post('/api/machines', heron), admin.post(`/api/people/${body.id}/disable`), admin.delete(`/api/people/${body.id}/roles/1`)])
      expect((await other.set('Idempotency-Key', key).expect(409)).body.type).toBe('/problems/key-reused')
    expect(await countEntries(w)).toBe(entries)
  })

  it('is another key in the hands of another person', async () => {
    const w = await aWorkplace()
    const one = await w.as('administrator')
    const two = await w.as('administrator')
    await one.post('/api/machines', heron).set('Idempotency-Key', key).expect(201)
    await two.post('/api/machines', { ...heron, key: 'egret' }).set('Idempotency-Key', key).expect(201)
  })

  it('and fields in another order are the same request', async () => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    await admin.post('/api/machines', heron).set('Idempotency-Key', key).expect(201)
    await admin.post('/api/machines', { description: heron.description, name: heron.name, key: heron.key }).set('Idempotency-Key', key).expect(201)
  })
})

describe('a key that is none', () => {
  it.each(['short', 'x'.repeat(81), 'with spaces in it', 'ümlaut-key-1', ''])('"%s"', async (bad) => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    const answer = await admin.post('/api/machines', heron).set('Idempotency-Key', bad.replaceAll(/[^\x20-\x7e]/g, '\u00fc')).expect(400)
    expect(answer.body).toMatchObject({ type: '/problems/invalid-request', detail: expect.stringContaining('Idempotency-Key') })
    expect(await w.orm.em.fork().count(Machine)).toBe(0)
  })
})

describe('the state that an act was decided on', () => {
  it('must be said (428), must be the present one (412), and the next one is told', async () => {
    const w = await aWorkplace()
    await machines(w)
    const engineer = await w.as('controls engineer')
    const { body: change } = await engineer.post('/api/changes', { machine: 'dunlin', title: 'Softer knees' }).expect(201)
    const path = `/api/changes/${change.key}`
    expect((await engineer.get(path).expect(200)).headers.etag).toBe('"1"')
    const entries = await countEntries(w)
    expect((await engineer.patch(path, { title: 'Softer' }).expect(428)).body).toMatchObject({ type: '/problems/precondition-required', status: 428, detail: expect.stringContaining('Nothing was done') })
    for (const stale of ['"0"', '"2"', '"abc"', 'W/"1"', '1', '*', '"1", "2"'])
      expect((await engineer.patch(path, { title: 'Softer' }).set('If-Match', stale).expect(412)).body).toMatchObject({ type: '/problems/precondition-failed', status: 412 })
    expect((await engineer.get(path)).headers.etag).toBe('"1"')
    expect(await countEntries(w)).toBe(entries)
    const altered = await engineer.patch(path, { title: 'Softer' }).set('If-Match', '"1"').expect(200)
    expect(altered.headers.etag).toBe('"2"')
    const late = await engineer.patch(path, { title: 'Softest' }).set('If-Match', '"1"').expect(412)
    expect(late.body).toMatchObject({ revision: 2, detail: expect.stringContaining('what you typed is still with you') })
    expect((await engineer.get(path)).body.title).toBe('Softer')
  })

  it('lets one of two at once win', async () => {
    const w = await aWorkplace()
    await machines(w)
    const engineer = await w.as('controls engineer')
    const { body: change } = await engineer.post('/api/changes', { machine: 'dunlin', title: 'Softer knees' }).expect(201)
    const path = `/api/changes/${change.key}`
    const answers = await Promise.all(['One', 'Two', 'Three'].map((title) => engineer.patch(path, { title }).set('If-Match', '"1"')))
    expect(answers.map((a) => a.status).sort()).toEqual([200, 412, 412])
  })
})
