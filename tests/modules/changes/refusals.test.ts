import { beforeAll, describe, expect, it } from 'vitest'
import { printSet } from '../../../shared/parameters/set-text.ts'
import { aMachine } from '../../support/a-release.ts'
import { aDraft, aWalker, etag, read, readAll, reviewed, submitted, through, twoKnees, type Walker } from '../../support/a-walker.ts'
import { password } from '../../support/workplace.ts'

const gain = '/families/knee/values/velocityGain'

describe('refusals around a draft', () => {
  let w: Walker
  let key: string
  beforeAll(async () => {
    w = await aWalker()
    key = await aDraft(w)
  })

  it('asks which state an act was decided on (428), and refuses an older one (412)', async () => {
    await w.engineer.post(`/api/changes/${key}/submit`).expect(428)
    const stale = await w.engineer.put(`/api/changes/${key}/text`, { text: printSet(twoKnees()) }).set('If-Match', '"1"').expect(412)
    expect(stale.body).toMatchObject({ type: '/problems/precondition-failed', revision: (await read(w.engineer, key)).revision })
    await w.engineer.put(`/api/changes/${key}/text`, { text: '{}' }).set('If-Match', 'W/"x"').expect(412)
  })

  it('lets nobody write who was not invited', async () => {
    const refusal = await w.other.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.2, to: 3 }] }).expect(403)
    expect(refusal.body.detail).toContain('invite you')
    await w.reviewer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.2, to: 3 }] }).expect(403)
    expect((await read(w.engineer, key)).set.families.knee.values.velocityGain).toBe(3.2)
  })

  it('tells two writers of one value what stands there, and keeps both', async () => {
    await w.engineer.post(`/api/changes/${key}/writers`, { person: w.other.me.id }).expect(200)
    await w.other.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.2, to: 3.1 }] }).expect(200)
    const refusal = await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.2, to: 3.3 }] }).expect(409)
    expect(refusal.body).toMatchObject({ type: '/problems/value-conflict', conflicts: [{ pointer: gain, yours: 3.3, now: 3.1 }] })
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.1, to: 3.2 }] }).expect(200)
  })

  it('refuses a person who is no controls engineer of the machine as writer', async () => {
    await w.engineer.post(`/api/changes/${key}/writers`, { person: w.reviewer.me.id }).expect(400)
    await w.engineer.post(`/api/changes/${key}/writers`, { person: 99_999 }).expect(400)
  })

  it.each([
    ['broken text', '{ "buses": {', 'line 1'],
    ['a member given twice', '{ "buses": {}, "buses": {}, "families": {}, "joints": {} }', 'given twice'],
    ['an unknown field', '{ "buses": {}, "families": {}, "joints": {}, "speed": 1 }', 'not known here'],
    ['a trailing comma', '{ "buses": {}, "families": {}, "joints": {}, }', 'line 1'],
    ['a joint on no bus', printSet(twoKnees()).replace('"bus": "fore"', '"bus": "port"'), 'there is no bus'],
    ['a value beyond numbers', printSet(twoKnees()).replace('"R_on": 0.06', '"R_on": 1e999'), 'R_on'],
    ['crossed bounds', printSet(twoKnees()).replace('"low": 21', '"low": 25'), 'bounds cross'],
    ['a prototype as a name', '{ "buses": {}, "families": {}, "joints": { "__proto__": {} } }', '__proto__'],
  ])('refuses %s with its place, and keeps what was saved', async (_what, text, told) => {
    const before = await read(w.engineer, key)
    const refusal = await w.engineer.put(`/api/changes/${key}/text`, { text }).set('If-Match', etag(before)).expect(422)
    expect(refusal.body.type).toBe('/problems/content-invalid')
    expect(JSON.stringify(refusal.body.errors)).toContain(told)
    expect(refusal.body.problems[0]).toMatchObject({ line: expect.any(Number), column: expect.any(Number) })
    expect((await read(w.engineer, key)).text).toBe(before.text)
  })

  it('keeps comments of the text through edits of values', async () => {
    const before = await read(w.engineer, key)
    const text = before.text.replace('"velocityGain"', '// tried on the stand, 12 April\n        "velocityGain"')
    await w.engineer.put(`/api/changes/${key}/text`, { text }).set('If-Match', etag(before)).expect(200)
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.2, to: 3.15 }] }).expect(200)
    const after = await read(w.engineer, key)
    expect(after.text).toContain('// tried on the stand, 12 April')
    expect(after.set.families.knee.values.velocityGain).toBe(3.15)
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.15, to: 3.2 }] }).expect(200)
  })

  it('refuses to submit without a reason', async () => {
    const { revision } = (await w.engineer.patch(`/api/changes/${key}`, { reason: '  ' }).set('If-Match', etag(await read(w.engineer, key))).expect(200)).body
    const refusal = await w.engineer.post(`/api/changes/${key}/submit`).set('If-Match', `"${revision}"`).expect(422)
    expect(refusal.body.errors).toEqual([{ pointer: '/reason', detail: expect.stringContaining('why') }])
    await w.engineer.patch(`/api/changes/${key}`, { reason: 'Because the stand said so.' }).set('If-Match', `"${revision}"`).expect(200)
  })

  it('refuses to submit values outside the schema, naming parameter, value and range', async () => {
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/currentLimit', from: 2.6, to: 7 }] }).expect(200)
    const refusal = await w.engineer.post(`/api/changes/${key}/submit`).set('If-Match', etag(await read(w.engineer, key))).expect(422)
    expect(refusal.body.errors).toContainEqual({ pointer: '/families/knee/values/currentLimit', detail: expect.stringMatching(/7.*6/) })
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/currentLimit', from: 7, to: 2.6 }] }).expect(200)
  })

  it('refuses to submit two boards at one address', async () => {
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/joints/r1-knee/address', from: 0x3b, to: 0x33 }] }).expect(200)
    const refusal = await w.engineer.post(`/api/changes/${key}/submit`).set('If-Match', etag(await read(w.engineer, key))).expect(422)
    expect(JSON.stringify(refusal.body.errors)).toContain('0x33')
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/joints/r1-knee/address', from: 0x33, to: 0x3b }] }).expect(200)
  })

  it('wants a concession for a watchdog that is off, and takes it as one', async () => {
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/busWatchdog', from: 250, to: 0 }] }).expect(200)
    const refusal = await w.engineer.post(`/api/changes/${key}/submit`).set('If-Match', etag(await read(w.engineer, key))).expect(422)
    expect(refusal.body.errors).toEqual([{ pointer: '/concessions', detail: expect.stringContaining('watchdog') }])
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/busWatchdog', from: 0, to: 250 }] }).expect(200)
  })

  it('does an act once when its request is repeated', async () => {
    const draft = (id: string, title = 'Sent twice') => w.engineer.post('/api/changes', { machine: 'dunlin', title }).set('Idempotency-Key', id)
    const first = await draft('same-key-for-both').expect(201)
    const again = await draft('same-key-for-both').expect(201)
    expect(again.body).toEqual(first.body)
    await draft('same-key-for-both', 'Another title').expect(409)
  })

  it('finds nothing under the key of another machine', async () => {
    await aMachine(w, 'teasel')
    const stranger = await w.as([['controls engineer', 'teasel']])
    await stranger.get(`/api/changes/${key}`).expect(404)
    await stranger.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.2, to: 1 }] }).expect(404)
    await stranger.post('/api/changes', { machine: 'dunlin', title: 'Not mine' }).expect(404)
    await stranger.get('/api/changes/dunlin-999').expect(404)
    expect((await stranger.get('/api/changes').expect(200)).body).toEqual([])
  })
})

describe('what voids signatures', () => {
  it('returning does: back to draft, with the reason mailed to its writers', async () => {
    const w = await aWalker()
    const key = await aDraft(w)
    await submitted(w, key)
    const approved = await reviewed(w, key)
    await w.manager.post(`/api/changes/${key}/return`, { reason: 'Log at rest, please.' }).set('If-Match', etag(approved)).expect(200)
    const view = await read(w.engineer, key)
    expect(view).toMatchObject({ state: 'draft', life: 'returned', contentHash: null, signatures: [{ void: true }] })
    expect(view.events.at(-1)).toMatchObject({ kind: 'returned', note: 'Log at rest, please.' })
    const { Mail } = await import('../../../server/modules/mail/mail.entity.ts')
    expect(await w.orm.em.fork().count(Mail, { to: w.engineer.me.email, subject: { $like: 'Returned%' } })).toBe(1)
    await w.engineer.post(`/api/changes/${key}/return`, { reason: 'x' }).set('If-Match', etag(view)).expect(403)
  })

  it('a new policy does: the change goes back to submitted on its new hash', async () => {
    const w = await aWalker()
    const key = await aDraft(w)
    await submitted(w, key)
    const approved = await reviewed(w, key)
    await readAll(w.manager, key)
    const { Machine } = await import('../../../server/modules/machines/machine.entity.ts')
    const { PolicyVersion } = await import('../../../server/modules/policy/policy-version.entity.ts')
    const em = w.orm.em.fork()
    const machine = await em.findOneOrFail(Machine, { key: 'dunlin' })
    const old = await em.findOneOrFail(PolicyVersion, { machine })
    em.create(PolicyVersion, { machine, number: 2, content: { ...old.content, overshootPercent: 12 }, reason: 'Tighter.', proposedAt: w.services.now(), signedAt: w.services.now() })
    await em.flush()
    const refusal = await w.manager.post(`/api/changes/${key}/release`, { password, contentHash: approved.contentHash, version: '1.0.0' }).set('If-Match', etag(approved)).expect(422)
    expect(refusal.body.type).toBe('/problems/check-stale')
    const view = await read(w.manager, key)
    expect(view).toMatchObject({ state: 'submitted', life: 'signature void', signatures: [{ void: true }] })
    expect(view.contentHash).not.toBe(approved.contentHash)
    expect((await reviewed(w, key)).state).toBe('approved')
  })
})

describe('the base of a change', () => {
  it('must be the newest release; bringing up to date lays the draft over it, conflicts decided one by one', async () => {
    const w = await aWalker()
    await through(w, await aDraft(w), '1.0.0')
    const draft = async (title: string, edits: object[]) => {
      const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title, reason: 'Tried on the stand.' }).expect(201)).body as { key: string }
      await w.engineer.patch(`/api/changes/${key}/values`, { edits }).expect(200)
      return key
    }
    const first = await draft('Softer', [{ pointer: gain, from: 3.2, to: 3.0 }])
    const second = await draft('Softer R1, slower', [{ pointer: gain, from: 3.2, to: 2.8 }, { pointer: '/families/knee/values/speedLimit', from: 6, to: 5 }])
    await submitted(w, second)
    await through(w, first, '1.0.1')
    const view = await read(w.reviewer, second)
    expect(view.may.signPeerReview).toMatchObject({ allowed: false })
    const state = (await w.engineer.get(`/api/changes/${second}/up-to-date`).expect(200)).body
    expect(state).toEqual({ newest: '1.0.1', conflicts: [{ pointer: gain, base: 3.2, yours: 2.8, theirs: 3.0 }] })
    await w.engineer.post(`/api/changes/${second}/up-to-date`, { decisions: [] }).set('If-Match', etag(view)).expect(409)
    const done = (await w.engineer.post(`/api/changes/${second}/up-to-date`, { decisions: [{ pointer: gain, keep: 'theirs' }] }).set('If-Match', etag(view)).expect(200)).body
    expect(done).toMatchObject({ state: 'draft', baseVersion: '1.0.1' })
    expect(done.set.families.knee.values).toMatchObject({ velocityGain: 3.0, speedLimit: 5 })
  })

  it('wants a reason for a lower step than proposed, and no version twice', async () => {
    const w = await aWalker()
    await through(w, await aDraft(w), '1.0.0')
    const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Slower', reason: 'Tried.' }).expect(201)).body as { key: string }
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/speedLimit', from: 6, to: 5 }] }).expect(200)
    await submitted(w, key)
    const view = await reviewed(w, key)
    await readAll(w.manager, key)
    expect((await w.manager.get(`/api/changes/${key}/version`).expect(200)).body).toMatchObject({ version: '1.1.0', step: 'minor' })
    const release = (version: string, stepReason = '') => w.manager.post(`/api/changes/${key}/release`, { password, contentHash: view.contentHash, version, stepReason }).set('If-Match', etag(view))
    expect((await release('1.0.0').expect(422)).body.detail).toContain('does not come after')
    expect((await release('1.0.1').expect(422)).body.errors).toEqual([{ pointer: '/stepReason', detail: expect.stringContaining('reason') }])
    await release('1.0.1', 'The limit was never reached in use.').expect(201)
    expect((await w.observer.get('/api/machines/dunlin/releases/1.0.1').expect(200)).body).toMatchObject({ step: 'patch', proposedStep: 'minor', stepReason: 'The limit was never reached in use.' })
    await w.observer.get('/api/machines/dunlin/releases/9.9.9').expect(404)
  })

  it('lets nobody sign who published a firmware version the change moves a joint to', async () => {
    const w = await aWalker()
    const key = await aDraft(w)
    await submitted(w, key)
    const { FirmwareVersion } = await import('../../../server/modules/firmware/firmware-version.entity.ts')
    const em = w.orm.em.fork()
    const version = await em.findOneOrFail(FirmwareVersion, { version: '2.1.0' })
    version.publishedBy = em.getReference((await import('../../../server/modules/people/person.entity.ts')).Person, w.reviewer.me.id)
    await em.flush()
    const view = await read(w.reviewer, key)
    const refusal = await w.reviewer.post(`/api/changes/${key}/sign`, { password, contentHash: view.contentHash }).set('If-Match', etag(view)).expect(403)
    expect(refusal.body.detail).toContain('published a firmware version')
  })
})

describe('withdrawal', () => {
  it('takes the version typed again, is kept for good, and leaves the images to release managers', async () => {
    const w = await aWalker()
    await through(w, await aDraft(w), '1.0.0')
    const withdraw = (version: string) => w.manager.post('/api/machines/dunlin/releases/1.0.0/withdraw', { version, reason: 'The knee hums.' })
    await withdraw('1.0.1').expect(400)
    expect((await withdraw('1.0.0').expect(200)).body).toMatchObject({ state: 'withdrawn', withdrawal: { reason: 'The knee hums.' } })
    await withdraw('1.0.0').expect(409)
    await w.builder.get('/api/machines/dunlin/releases/1.0.0/joints/l1-knee/image.hex').expect(403)
    const marked = await w.manager.get('/api/machines/dunlin/releases/1.0.0/joints/l1-knee/image.hex').expect(200)
    expect(marked.headers['content-disposition']).toContain('WITHDRAWN')
    await w.builder.post('/api/machines/dunlin/releases/1.0.0/withdraw', { version: '1.0.0', reason: 'x' }).expect(403)
  })
})
