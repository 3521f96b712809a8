import { beforeAll, describe, expect, it } from 'vitest'
import type { ChangeView } from '../../../shared/contract/changes.ts'
import type { EvidenceSummary, EvidenceView } from '../../../shared/contract/evidence.ts'
import type { ReleaseView } from '../../../shared/contract/releases.ts'
import { Release } from '../../../server/modules/releases/release.entity.ts'
import { aDraft, aWalker, etag, read, readAll, released, reviewed, submitted, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import { password } from '../../support/workplace.ts'
import { aReadLog, kneeLog, readIt, sendLog } from './a-log.ts'

describe('evidence of a change', () => {
  let w: Walker
  let key: string
  let at: string
  beforeAll(async () => {
    w = await aWalker()
    key = await aDraft(w)
    at = `/api/changes/${key}/joints/l1-knee/evidence`
  })

  it('is added by its writers alone', async () => {
    const refusal = await sendLog(w.other, at, kneeLog()).expect(409)
    expect(refusal.body.detail).toContain('Only its author and the people invited write in it')
    await sendLog(w.engineer, `/api/changes/${key}/joints/l9-knee/evidence`, kneeLog()).expect(404)
  })

  it('counts once its columns are read, not before: the content alters with it', async () => {
    const unread = (await sendLog(w.engineer, at, kneeLog(), 'step.csv').expect(201)).body as EvidenceView
    expect(unread.change).toBe(key)
    const before = await submitted(w, key)
    await readIt(w, w.engineer, unread)
    const after = await read(w.engineer, key)
    expect(after.state).toBe('submitted')
    expect(after.contentHash).not.toBe(before.contentHash)
    expect(after.revision).toBe(before.revision + 1)
  })

  it('is still added while nobody has signed, and taken away again: the same evidence has the same hash', async () => {
    const before = await read(w.engineer, key)
    const second = await aReadLog(w, w.engineer, at, kneeLog({ seed: 8 }), 'again.csv')
    const between = await read(w.engineer, key)
    expect(between.contentHash).not.toBe(before.contentHash)
    expect((await w.reviewer.post(`/api/machines/dunlin/evidence/${second.number}/remove`).expect(403)).body.type).toBe('/problems/not-permitted')
    await w.engineer.post(`/api/machines/dunlin/evidence/${second.number}/remove`).expect(200)
    expect((await read(w.engineer, key)).contentHash).toBe(before.contentHash)
    const list = (await w.reviewer.get(`/api/changes/${key}/evidence`).expect(200)).body as EvidenceSummary[]
    expect(list.map((e) => e.name)).toEqual(['step.csv'])
  })

  it('refuses a signature on the content before it came', async () => {
    const before = await read(w.reviewer, key)
    const more = await aReadLog(w, w.engineer, at, kneeLog({ seed: 9 }), 'late.csv')
    await readAll(w.reviewer, key)
    const fresh = await read(w.reviewer, key)
    const refusal = await w.reviewer.post(`/api/changes/${key}/sign`, { password, contentHash: before.contentHash }).set('If-Match', etag(fresh)).expect(409)
    expect(refusal.body.type).toBe('/problems/content-differs')
    await w.engineer.post(`/api/machines/dunlin/evidence/${more.number}/remove`).expect(200)
  })

  it('is closed by the first signature: nothing comes or goes, nor is a log read that was sent before', async () => {
    const waiting = (await sendLog(w.engineer, at, kneeLog({ seed: 10 }), 'too-late.csv').expect(201)).body as EvidenceView
    await reviewed(w, key)
    expect((await sendLog(w.engineer, at, kneeLog()).expect(409)).body.detail).toContain('part of what was signed')
    await w.engineer.post(`/api/machines/dunlin/evidence/${waiting.number}/read`, { mapping: waiting.mapping }).expect(409)
    const [first] = (await w.engineer.get(`/api/changes/${key}/evidence`)).body as EvidenceSummary[]
    await w.engineer.post(`/api/machines/dunlin/evidence/${first.number}/remove`).expect(409)
    const step = (await w.engineer.get('/api/machines/dunlin/evidence/1')).body as EvidenceView
    expect(step.may.remove).toMatchObject({ allowed: false })
  })

  it('stands in the content that was signed and released, by the hash of the file as sent', async () => {
    await released(w, key)
    await w.observer.get('/api/machines/dunlin/releases/1.0.0').expect(200).then((r) => expect((r.body as ReleaseView).version).toBe('1.0.0'))
    const release = await w.orm.em.fork().findOneOrFail(Release, { version: '1.0.0' }, { populate: ['content'] })
    const content = JSON.parse(release.content) as { evidence: { joint: string; sha256: string; columns: string }[] }
    const step = (await w.engineer.get('/api/machines/dunlin/evidence/1')).body as EvidenceView
    expect(content.evidence).toEqual([{ joint: 'l1-knee', sha256: step.sha256, columns: expect.stringMatching(/^[0-9a-f]{64}$/) as string }])
  })
})

describe('measured over predicted, and identified', () => {
  let w: Walker
  let log: EvidenceView
  const at = () => `/api/machines/dunlin/evidence/${log.number}`
  beforeAll(async () => {
    w = await aWalker()
    await aDraft(w).then(async (key) => {
      await submitted(w, key)
      await reviewed(w, key)
      await released(w, key)
    })
    log = await aReadLog(w, w.engineer, '/api/machines/dunlin/joints/l1-knee/evidence')
  })

  it('says how far the prediction of the released model is from the log, signal by signal', async () => {
    const view = (await w.observer.get(`${at()}/comparison`).expect(200)).body
    expect(view.modelOf).toBe('release 1.0.0')
    const errors = Object.fromEntries(view.signals.map((s: { signal: string; normalisedRmsError: number }) => [s.signal, s.normalisedRmsError]))
    expect(Object.keys(errors)).toEqual(['position', 'speed', 'current', 'voltage'])
    // the bench's joint has a fifth more load inertia: it shows, and stays near
    expect(errors.current).toBeGreaterThan(0.005)
    expect(errors.position).toBeLessThan(0.05)
  })

  it('gives the values of the joint on the bench, not those of its model', async () => {
    const view = (await w.observer.get(`${at()}/identification?T_winding=25`).expect(200)).body
    const values = Object.fromEntries(view.values.map((v: { letter: string; value: number | null; modelled: number | null; edit: { to: unknown } | null }) => [v.letter, v]))
    // kneeLog's own factors: R 1.05, J_load 1.2, tau_c 1.3
    expect(values.R.value / values.R.modelled).toBeCloseTo(1.05, 2)
    expect(values.tau_c.value / values.tau_c.modelled).toBeCloseTo(1.3, 1)
    const J_load = w && (await w.observer.get('/api/machines/dunlin/families/knee')).body.settings.driveTrain.J_load
    expect(values.J.edit.to.value / J_load.value).toBeCloseTo(1.2, 1)
    // bounds keep their ratio
    expect(values.J.edit.to.low / values.J.edit.to.value).toBeCloseTo(J_load.low / J_load.value, 4)
  })

  it('refuses values that the run does not show, with the run that would', async () => {
    const still = await aReadLog(w, w.engineer, '/api/machines/dunlin/joints/l1-knee/evidence', kneeLog({ times: [0], values: [0], seconds: 0.5 }), 'at rest.csv')
    const view = (await w.observer.get(`/api/machines/dunlin/evidence/${still.number}/identification`).expect(200)).body
    for (const letter of ['J', 'b', 'tau_c', 'k_e']) {
      const found = view.values.find((v: { letter: string }) => v.letter === letter)
      expect(found.value).toBeNull()
      expect(found.remedy).toMatch(/^(Step|Run|Hold|Log)/)
      expect(found.edit).toBeNull()
    }
    const refusal = await w.engineer.post(`/api/machines/dunlin/evidence/${still.number}/use`, { letters: ['J'], T_winding: 25 }).expect(400)
    expect(refusal.body.errors[0].pointer).toBe('/letters/0')
  })

  it('drafts a change with the values chosen, of which the log is the evidence', async () => {
    const { change } = (await w.engineer.post(`${at()}/use`, { letters: ['R', 'J', 'tau_c'], T_winding: 25, title: 'Knee as measured' }).expect(201)).body as { change: string }
    const view: ChangeView = await read(w.engineer, change)
    expect(view).toMatchObject({ title: 'Knee as measured', state: 'draft', author: w.engineer.me.name })
    expect(view.reason).toContain(log.sha256)
    const [before, after] = [view.base.families.knee.driveTrain, view.set.families.knee.driveTrain]
    expect(Object.keys(after).filter((k) => JSON.stringify(after[k as 'R']) !== JSON.stringify(before[k as 'R'])).sort()).toEqual(['J_load', 'R', 'tau_c'])
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'identified values used', subject: { change }, details: { sha256: log.sha256, values: { R: { unit: 'Ω' } } } })
    expect(((await w.engineer.get(at())).body as EvidenceView).change).toBe(change)
    // the draft's own model is what the log is held against from then on, and it fits better
    const [then, now] = await Promise.all(['release', ''].map(async (c) => (await w.observer.get(`${at()}/comparison?change=${c}`)).body))
    expect(now.modelOf).toBe(`change ${change}`)
    const current = (v: { signals: { signal: string; normalisedRmsError: number }[] }) => v.signals.find((s) => s.signal === 'current')!.normalisedRmsError
    expect(current(now)).toBeLessThan(current(then))
  })

  it('writes into a draft of one\'s own, and into nobody else\'s', async () => {
    const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Mine' }).expect(201)).body as { key: string }
    await w.engineer.post(`${at()}/use`, { letters: ['k_e'], T_winding: 25, change: key }).expect(201)
    expect((await read(w.engineer, key)).set.families.knee.driveTrain.k_t).not.toEqual((await read(w.engineer, key)).base.families.knee.driveTrain.k_t)
    expect((await w.other.post(`${at()}/use`, { letters: ['k_e'], T_winding: 25, change: key }).expect(403)).body.type).toBe('/problems/not-permitted')
    await w.builder.post(`${at()}/use`, { letters: ['R'], T_winding: 25 }).expect(403)
    await w.engineer.post(`${at()}/use`, { letters: ['R'], T_winding: 25, change: 'teasel-1' }).expect(404)
  })

  it('refuses to predict from a set-point of another mode', async () => {
    const sent = (await sendLog(w.engineer, '/api/machines/dunlin/joints/l1-knee/evidence', kneeLog(), 'as speed.csv').expect(201)).body as EvidenceView
    const wrong = await readIt(w, w.engineer, sent, sent.mapping.map((m) => (m.signal === 'set-point' ? { ...m, unit: 'rpm' } : m)))
    const refusal = await w.observer.get(`/api/machines/dunlin/evidence/${wrong.number}/comparison`).expect(422)
    expect(refusal.body.detail).toContain('runs in position mode')
  })
})
