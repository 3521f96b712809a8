import { describe, expect, it } from 'vitest'
import { concessionProblems } from '../../../server/modules/policy/concession-rules.ts'
import { mayPropose } from '../../../server/modules/policy/may-propose.ts'
import type { CheckView } from '../../../shared/contract/checks.ts'
import { defaultPolicy, type PolicyContent } from '../../../shared/contract/policy.ts'
import { aDraft, aWalker, etag, read, readAll, reviewed, submitted, through, twoKnees, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import { password } from '../../support/workplace.ts'

const gain = '/families/knee/values/velocityGain'

/** Puts a policy in force in the usual way: an administrator proposes, a release manager signs. */
async function inForce(w: Walker, part: Partial<PolicyContent>) {
  const admin = await w.as('administrator')
  const { body } = await admin.post('/api/machines/dunlin/policy', { content: { ...defaultPolicy, ...part }, reason: 'For the legs.' }).expect(201)
  await w.manager.post(`/api/machines/dunlin/policy/${(body.versions as { number: number }[])[0].number}/sign`, { password }).expect(200)
}

/** A draft whose watchdog is off, with the concession that this needs. */
async function conceded(w: Walker, end: { until: string | null; count: number | null }) {
  const set = twoKnees()
  set.families.knee.values.busWatchdog = 0
  const key = await aDraft(w, set)
  const { findings } = (await w.engineer.get(`/api/changes/${key}/check`).expect(200)).body as CheckView
  const finding = findings.find((f) => f.level === 'concession needed')!
  await w.engineer.patch(`/api/changes/${key}`, { concessions: [{ finding: finding.key, characteristic: 'bus watchdog', limit: 'off', reason: 'The bench bus is slow.', ...end }] }).set('If-Match', etag(await read(w.engineer, key))).expect(200)
  return key
}

const submit = async (w: Walker, key: string) => w.engineer.post(`/api/changes/${key}/submit`).set('If-Match', etag(await read(w.engineer, key)))

describe('concessions by policy', () => {
  const rules = { concession: { longestDays: 30, mostBoards: 6 } }
  const now = new Date('2026-03-02T09:00:00Z')
  const asked = (until: string | null, count: number | null) => ({ finding: 'f', characteristic: 'overshoot', limit: '20 %', reason: 'It is slow.', until, count })

  it.each([
    ['its last day', '2026-04-01', null, []],
    ['one day more', '2026-04-02', null, ['/concessions/0/until']],
    ['today', '2026-03-02', null, []],
    ['a day that has passed', '2026-03-01', null, ['/concessions/0/until']],
    ['as many boards', null, 6, []],
    ['one board more', null, 7, ['/concessions/0/count']],
  ])('%s', (_what, until, count, pointers) => {
    expect(concessionProblems([asked(until, count)], rules, now).map((p) => p.pointer)).toEqual(pointers)
  })

  it('a policy from before the rules asks nothing but that the day has not passed', () => {
    expect(concessionProblems([asked('2036-01-01', null), asked(null, 90_000)], {}, now)).toEqual([])
    expect(concessionProblems([asked('2026-01-01', null)], {}, now)).toHaveLength(1)
  })

  it('hold a submission back in words, and let it go once they are met', async () => {
    const w = await aWalker()
    await inForce(w, rules)
    const key = await conceded(w, { until: null, count: 12 })
    expect((await read(w.engineer, key)).concessionRules).toEqual({ lastDay: '2026-04-01', mostBoards: 6 })
    const refusal = (await (await submit(w, key)).body) as { type: string; errors: object[] }
    expect(refusal.type).toBe('/problems/content-invalid')
    expect(refusal.errors).toEqual([{ pointer: '/concessions/0/count', detail: 'bus watchdog: policy lets a concession cover 6 boards at most' }])
    const view = await read(w.engineer, key)
    await w.engineer.patch(`/api/changes/${key}`, { concessions: [{ ...view.concessions[0], count: 6 }] }).set('If-Match', etag(view)).expect(200)
    expect((await submit(w, key)).status).toBe(200)
  })

  it('stop a signature when policy was tightened since', async () => {
    const w = await aWalker()
    const key = await conceded(w, { until: null, count: 12 })
    await submitted(w, key)
    await inForce(w, rules)
    await readAll(w.reviewer, key)
    const view = await read(w.reviewer, key)
    const refusal = await w.reviewer.post(`/api/changes/${key}/sign`, { password, contentHash: view.contentHash }).set('If-Match', etag(view)).expect(409)
    expect(refusal.body).toMatchObject({ type: '/problems/wrong-state', detail: expect.stringContaining('6 boards at most. Nothing was signed; return the change'), errors: [{ pointer: '/concessions/0/count' }] })
    expect((await read(w.reviewer, key)).signatures).toEqual([])
  })
})

describe('who may propose which step', () => {
  const held = (role: 'controls engineer' | 'peer reviewer' | 'release manager', machine: string | null = null) => [{ role, machine, confirmed: true }]
  const rules = { mayPropose: { patch: 'controls engineer', minor: 'peer reviewer', major: 'release manager' } } as const

  it.each([
    ['patch', held('controls engineer'), true],
    ['minor', held('controls engineer'), false],
    ['minor', held('peer reviewer'), true],
    ['minor', held('peer reviewer', 'teasel'), false],
    ['major', held('peer reviewer', 'dunlin'), false],
    ['major', held('release manager', 'dunlin'), true],
  ] as const)('%s by %j: %s', (step, roles, allowed) => {
    expect(mayPropose(step, rules, roles, 'dunlin').allowed).toBe(allowed)
    expect(mayPropose(step, {}, roles, 'dunlin').allowed).toBe(true)
  })

  it('is asked when a change is submitted; the refusal is written down, and a lower step goes', async () => {
    const w = await aWalker()
    await through(w, await aDraft(w), '1.0.0')
    await inForce(w, { mayPropose: { ...rules.mayPropose } })
    const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'More current', reason: 'Mud.' }).expect(201)).body as { key: string }
    const put = (edits: object[]) => w.engineer.patch(`/api/changes/${key}/values`, { edits }).expect(200)
    await put([{ pointer: '/families/knee/values/currentLimit', from: 2.6, to: 2.5 }])
    const refused = await submit(w, key)
    expect(refused.status).toBe(403)
    expect((refused.body as { detail: string }).detail).toBe('Policy lets only a peer reviewer propose a minor version. This change steps to 1.1.0. It stays a draft with everything in it; have one of them submit it as a writer, or propose less.')
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'refused', details: { asked: 'submit a change', refusal: 'not-permitted' } })
    expect((await read(w.engineer, key)).state).toBe('draft')
    await put([{ pointer: '/families/knee/values/currentLimit', from: 2.5, to: 2.6 }, { pointer: gain, from: 3.2, to: 3 }])
    expect((await submit(w, key)).status).toBe(200)
  })
})

describe('the count of peer reviews', () => {
  it('is what approves a change, two different people each', async () => {
    const w = await aWalker()
    await inForce(w, { peerReviews: 2 })
    const key = await aDraft(w)
    await submitted(w, key)
    expect(await read(w.reviewer, key)).toMatchObject({ peerReviewsNeeded: 2 })
    const once = await reviewed(w, key)
    expect(once.state).toBe('submitted')
    const again = await w.reviewer.post(`/api/changes/${key}/sign`, { password, contentHash: once.contentHash }).set('If-Match', etag(once)).expect(403)
    expect(again.body).toMatchObject({ type: '/problems/own-work', detail: expect.stringContaining('another person signs next') })
    const second = await w.as([['peer reviewer', 'dunlin']])
    expect((await reviewed({ ...w, reviewer: second }, key)).state).toBe('approved')
  })
})
