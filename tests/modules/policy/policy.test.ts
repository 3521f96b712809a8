import { describe, expect, it } from 'vitest'
import { Machine } from '../../../server/modules/machines/machine.entity.ts'
import { policyInForce } from '../../../server/modules/policy/policy-in-force.ts'
import { defaultPolicy, policyContradictions, PolicyContent } from '../../../shared/contract/policy.ts'
import { problemsOf } from '../../../server/http/validate.ts'
import { aWorkplace, password, type Workplace } from '../../support/workplace.ts'
import { countEntries, lastEntry, machines, mailsTo } from '../people/read-back.ts'

const path = '/api/machines/dunlin/policy'
const stricter = { ...defaultPolicy, peerReviews: 2, overshootPercent: 10 }
const proposal = { content: stricter, reason: 'Two reviews for the legs: they stand beside people.' }

async function aPlace(): Promise<Workplace> {
  const w = await aWorkplace()
  await machines(w)
  return w
}

const inForce = async (w: Workplace) => {
  const em = w.orm.em.fork()
  return (await policyInForce(em, await em.findOneOrFail(Machine, { key: 'dunlin' }))).number
}

describe('the policy a machine begins with', () => {
  it('is the defaults, in force, of nobody’s making, and fits its own schema', async () => {
    const w = await aPlace()
    const { body } = await (await w.as('observer')).get(path).expect(200)
    expect(body).toMatchObject({ machine: 'dunlin', machineName: 'Dunlin', inForce: { number: 1, state: 'in force', content: defaultPolicy, author: null, signedBy: null }, may: { propose: { allowed: false } } })
    expect(body.versions).toEqual([body.inForce])
    expect(problemsOf(PolicyContent, defaultPolicy)).toEqual([])
    expect(policyContradictions(defaultPolicy)).toEqual([])
    expect(await inForce(w)).toBe(1)
  })

  it('is not found by who may not read the machine', async () => {
    const w = await aPlace()
    const person = await w.as([['release manager', 'teasel'], ['administrator', 'teasel']])
    await person.get(path).expect(404)
    await person.post(path, proposal).expect(404)
    await person.post(`${path}/1/sign`, { password }).expect(404)
    await person.post(`${path}/1/decline`, { reason: 'No.' }).expect(404)
    await person.get('/api/machines/heron/policy').expect(404)
  })
})

describe('proposing a policy', () => {
  it('makes the next version, tells the release managers, and leaves the one in force', async () => {
    const w = await aPlace()
    const manager = await w.person('Hedda Lindqvist', [['release manager', 'dunlin']])
    const other = await w.person('Manager of teasel', [['release manager', 'teasel']])
    const admin = await w.as('administrator')
    const { body } = await admin.post(path, proposal).expect(201)
    expect(body.versions[0]).toMatchObject({ number: 2, state: 'proposed', content: stricter, reason: proposal.reason, author: admin.me.name, signedBy: null, may: { sign: { allowed: false, why: 'You proposed it: another release manager signs it.' }, decline: { allowed: true } } })
    expect(body.inForce.number).toBe(1)
    expect(body.may.propose).toEqual({ allowed: false, why: 'Version 2 waits for a signature.' })
    expect(await inForce(w)).toBe(1)
    expect(await lastEntry(w)).toMatchObject({ act: 'policy proposed', machineKey: 'dunlin', subject: { machine: 'dunlin', policy: 2 }, details: { reason: proposal.reason, content: stricter } })
    expect((await mailsTo(w, manager.email))[0]).toMatchObject({ subject: 'Policy of Dunlin: version 2 waits for a signature', text: expect.stringContaining('/policy?machine=dunlin') })
    expect(await mailsTo(w, other.email)).toEqual([])
  })

  it('waits for the one before it to be signed or declined', async () => {
    const w = await aPlace()
    const admin = await w.as('administrator')
    await admin.post(path, proposal).expect(201)
    expect((await admin.post(path, proposal).expect(409)).body.type).toBe('/problems/wrong-state')
    await admin.post(`${path}/2/decline`, { reason: 'Taken back.' }).expect(200)
    expect((await admin.post(path, proposal).expect(201)).body.versions[0].number).toBe(3)
  })

  it.each([
    ['a limit that is text', { overshootPercent: '15' }, 400, '/content/overshootPercent'],
    ['no peer review', { peerReviews: 0 }, 400, '/content/peerReviews'],
    ['half a review', { peerReviews: 1.5 }, 400, '/content/peerReviews'],
    ['a limit below nothing', { overshootPercent: -1 }, 400, '/content/overshootPercent'],
    ['a finding it does not know', { verdict: 'pass' }, 400, '/content/verdict'],
    ['a bus that is more than full', { busLoadPercent: { advise: 70, block: 101 } }, 400, '/content/busLoadPercent/block'],
    ['a worst case stricter than the nominal one', { phaseMarginDeg: { nominal: 45, worst: 50, block: 30 } }, 422, '/content/phaseMarginDeg/worst'],
    ['a block above the limit', { phaseMarginDeg: { nominal: 45, worst: 35, block: 40 } }, 422, '/content/phaseMarginDeg/block'],
    ['advice after the concession', { separation: { advise: 2, concession: 3 } }, 422, '/content/separation/concession'],
  ])('refuses %s', async (_what, part, status, pointer) => {
    const w = await aPlace()
    const admin = await w.as('administrator')
    const before = await countEntries(w)
    const { body } = await admin.post(path, { ...proposal, content: { ...stricter, ...part } }).expect(status)
    expect(body.errors.map((e: { pointer: string }) => e.pointer)).toEqual([pointer])
    expect(await countEntries(w)).toBe(before)
  })

  it('refuses one without a reason', async () => {
    const w = await aPlace()
    const admin = await w.as('administrator')
    for (const reason of ['', '   ']) expect((await admin.post(path, { ...proposal, reason }).expect(400)).body.errors[0].pointer).toBe('/reason')
  })

  it.each(['observer', 'controls engineer', 'peer reviewer', 'release manager', 'builder'] as const)('is not for a %s', async (role) => {
    const w = await aPlace()
    await (await w.as(role)).post(path, proposal).expect(403)
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', machineKey: 'dunlin', details: { asked: 'propose a policy' } })
  })

  it('is for an administrator of the machine', async () => {
    const w = await aPlace()
    await (await w.as([['administrator', 'dunlin']])).post(path, proposal).expect(201)
  })
})

describe('signing a policy', () => {
  it('puts it in force, supersedes the one before, and tells its author', async () => {
    const w = await aPlace()
    const admin = await w.person('Silvan Okoro', [['administrator', null]])
    await (await w.signIn(admin)).post(path, proposal).expect(201)
    const manager = await w.as([['release manager', 'dunlin']])
    expect((await manager.get(path)).body.versions[0].may).toEqual({ sign: { allowed: true }, decline: { allowed: true } })
    const { body } = await manager.post(`${path}/2/sign`, { password }).expect(200)
    expect(body.inForce).toMatchObject({ number: 2, state: 'in force', signedBy: manager.me.name, signedAt: '2026-03-02T09:00:00.000Z', may: { sign: { allowed: false }, decline: { allowed: false } } })
    expect(body.versions.map((v: { state: string }) => v.state)).toEqual(['in force', 'superseded'])
    expect(await inForce(w)).toBe(2)
    expect(await lastEntry(w)).toMatchObject({ act: 'policy signed', personId: manager.me.id, subject: { machine: 'dunlin', policy: 2 }, details: { author: 'Silvan Okoro', content: stricter, statement: expect.stringContaining('I did not propose it') } })
    expect((await mailsTo(w, admin.email))[0].subject).toBe('Policy of Dunlin: version 2 is in force')
    expect((await manager.post(`${path}/2/sign`, { password }).expect(409)).body.type).toBe('/problems/wrong-state')
    expect((await manager.post(`${path}/1/sign`, { password }).expect(409)).body.type).toBe('/problems/wrong-state')
  })

  it('is not for its author, though they manage releases too; the attempt is written down', async () => {
    const w = await aPlace()
    const both = await w.as([['administrator', null], ['release manager', null]])
    await both.post(path, proposal).expect(201)
    expect((await both.post(`${path}/2/sign`, { password }).expect(403)).body.type).toBe('/problems/own-work')
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', personId: both.me.id, subject: { machine: 'dunlin', policy: 2 }, details: { asked: 'sign a policy', refusal: 'own-work' } })
    expect(await inForce(w)).toBe(1)
  })

  it('takes the password again; a wrong one is written down', async () => {
    const w = await aPlace()
    await (await w.as('administrator')).post(path, proposal).expect(201)
    const manager = await w.as('release manager')
    expect((await manager.post(`${path}/2/sign`, { password: 'something else' }).expect(403)).body).toMatchObject({ type: '/problems/wrong-password', errors: [{ pointer: '/password' }] })
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', details: { refusal: 'wrong-password' } })
    await manager.post(`${path}/2/sign`, {}).expect(400)
    expect(await inForce(w)).toBe(1)
  })

  it('is not for a release manager whose right waits for confirmation', async () => {
    const w = await aPlace()
    await (await w.as('administrator')).post(path, proposal).expect(201)
    const waiting = await w.signIn(await w.person('Hedda Lindqvist', [['release manager', null]], { confirmed: false }))
    expect((await waiting.post(`${path}/2/sign`, { password }).expect(403)).body.type).toBe('/problems/signing-right-unconfirmed')
    expect(await inForce(w)).toBe(1)
  })

  it.each(['observer', 'controls engineer', 'peer reviewer', 'builder', 'administrator'] as const)('is not for a %s, nor is declining', async (role) => {
    const w = await aPlace()
    await (await w.as('administrator')).post(path, proposal).expect(201)
    const person = await w.as(role)
    await person.post(`${path}/2/sign`, { password }).expect(403)
    await person.post(`${path}/2/decline`, { reason: 'No.' }).expect(403)
    expect((await person.get(path)).body.versions[0].state).toBe('proposed')
  })

  it('finds no version that is not there', async () => {
    const w = await aPlace()
    const manager = await w.as('release manager')
    for (const none of ['2', '0', 'x', '1.0']) await manager.post(`${path}/${none}/sign`, { password }).expect(404)
  })
})

describe('declining a policy', () => {
  it('leaves the one in force and tells the author why', async () => {
    const w = await aPlace()
    const admin = await w.person('Silvan Okoro', [['administrator', null]])
    await (await w.signIn(admin)).post(path, proposal).expect(201)
    const manager = await w.as('release manager')
    const { body } = await manager.post(`${path}/2/decline`, { reason: 'The knees do not reach it.' }).expect(200)
    expect(body.versions[0]).toMatchObject({ number: 2, state: 'declined' })
    expect(body.inForce.number).toBe(1)
    expect(await lastEntry(w)).toMatchObject({ act: 'policy declined', subject: { policy: 2 }, details: { reason: 'The knees do not reach it.', author: 'Silvan Okoro' } })
    expect((await mailsTo(w, admin.email))[0].text).toContain('The knees do not reach it.')
    expect((await manager.post(`${path}/2/sign`, { password }).expect(409)).body.type).toBe('/problems/wrong-state')
    expect((await manager.post(`${path}/2/decline`, { reason: 'Again.' }).expect(409)).body.type).toBe('/problems/wrong-state')
    await manager.post(`${path}/1/decline`, { reason: 'Not the one in force.' }).expect(409)
    await manager.post(`${path}/2/decline`, {}).expect(400)
  })

  it('mails nothing to an author who takes it back', async () => {
    const w = await aPlace()
    const admin = await w.as('administrator')
    await admin.post(path, proposal).expect(201)
    await admin.post(`${path}/2/decline`, { reason: 'A slip.' }).expect(200)
    expect(await mailsTo(w, admin.me.email)).toEqual([])
  })
})
