import { beforeAll, describe, expect, it } from 'vitest'
import type { CheckView, QuickView, StretchesView } from '../../../shared/contract/checks.ts'
import { aDraft, aWalker, read, type Walker } from '../../support/a-walker.ts'

const gain = '/families/knee/values/velocityGain'

let w: Walker
let key: string
beforeAll(async () => {
  w = await aWalker()
  key = await aDraft(w)
})

const rows = async () => ((await w.orm.em.getConnection().execute('select count(*) as n from joint_analysis')) as { n: number }[])[0].n
const quick = (edits: object[], joint = 'l1-knee') => w.engineer.post(`/api/changes/${key}/check/quick`, { joint, edits })

describe('the quick check of one joint', () => {
  it('says what edits would do before they are saved, as the whole check says after', async () => {
    const edits = [{ pointer: gain, from: 3.2, to: 2.6 }]
    const before = await rows()
    const early = (await quick(edits).expect(200)).body as QuickView
    expect(await rows()).toBe(before)
    expect((await read(w.engineer, key)).revision).toBe((await read(w.observer, key)).revision)
    await w.engineer.patch(`/api/changes/${key}/values`, { edits }).expect(200)
    const whole = (await w.engineer.get(`/api/changes/${key}/check`).expect(200)).body as CheckView
    expect(early.joint).toEqual({ ...whole.joints.find((j) => j.joint === 'l1-knee')!, candidate: { ...whole.joints[0].candidate!, tolerance: null } })
    expect(early.findings.find((f) => f.kind === 'phase margin' && f.loop === 'velocity')!.value).toBe(whole.findings.find((f) => f.kind === 'phase margin' && f.loop === 'velocity')!.value)
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 2.6, to: 3.2 }] }).expect(200)
  })

  it('tells of an unstable loop', async () => {
    const answer = (await quick([{ pointer: gain, from: 3.2, to: 7.9 }, { pointer: '/families/knee/values/velocityWindow', from: 10, to: 60 }]).expect(200)).body as QuickView
    expect(answer.joint.candidate!.verdict).toBe('unstable')
    expect(answer.findings.some((f) => f.level === 'block')).toBe(true)
  })

  it.each([
    ['a joint that is not there', [], 'l9-knee', '/joint'],
    ['a place that is not there', [{ pointer: '/families/toe/values/velocityGain', to: 1 }], 'l1-knee', '/edits'],
    ['a value of no kind', [{ pointer: gain, to: { a: 1 } }], 'l1-knee', '/families/knee/values/velocityGain'],
  ])('refuses %s', async (_what, edits, joint, pointer) => {
    const { body } = await quick(edits, joint).expect(422)
    expect(body.errors[0].pointer).toBe(pointer)
    expect(body.detail).toContain('Nothing was saved')
  })
})

describe('stretches of a ruler', () => {
  const ask = (rulers: object[]) => w.observer.post(`/api/changes/${key}/check/stretches`, { joint: 'l1-knee', rulers })

  it('begin and end where the quick check turns', async () => {
    const { rulers } = (await ask([{ parameter: 'velocityGain', low: 0.05, high: 8 }]).expect(200)).body as StretchesView
    expect(rulers).toHaveLength(1)
    const [{ unstable }] = rulers
    expect(unstable.length).toBeGreaterThan(0)
    for (const { from, to } of unstable) {
      const verdictAt = async (value: number) => ((await quick([{ pointer: gain, from: 3.2, to: value }]).expect(200)).body as QuickView).joint.candidate!.verdict
      expect(await verdictAt((from + to) / 2)).toBe('unstable')
      // the edge is known to within a few parts in a thousand of the ruler; one gap of 25 outside it is stable again
      if (from > 0.05) expect(await verdictAt(from / (8 / 0.05) ** (1 / 24))).toBe('stable')
      if (to < 8) expect(await verdictAt(to * (8 / 0.05) ** (1 / 24))).toBe('stable')
    }
  })

  it('hold whole numbers where the value is counted, and leave out what the model does not vary', async () => {
    const { rulers } = (await ask([{ parameter: 'velocityWindow', low: 1, high: 64 }, { parameter: 'speedLimit', low: 0, high: 12 }]).expect(200)).body as StretchesView
    expect(rulers.map((r) => r.parameter)).toEqual(['velocityWindow'])
    for (const { from, to } of rulers[0].unstable) expect([from, to].every(Number.isInteger)).toBe(true)
  })

  it('refuse a ruler that runs backwards', async () => {
    expect((await ask([{ parameter: 'velocityGain', low: 3, high: 3 }]).expect(400)).body.errors[0].pointer).toBe('/rulers/0/low')
  })
})
