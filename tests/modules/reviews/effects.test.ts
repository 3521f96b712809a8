import { beforeAll, describe, expect, it } from 'vitest'
import { figureMoved, type Side } from '../../../server/modules/reviews/figure-moved.ts'
import type { CheckView } from '../../../shared/contract/checks.ts'
import type { EffectsView, RowEffect, ValueEffect } from '../../../shared/contract/reviews.ts'
import { defaultPolicy } from '../../../shared/contract/policy.ts'
import type { Edit } from '../../../shared/parameters/edits.ts'
import { aDraft, aWalker, through, type Walker } from '../../support/a-walker.ts'

const value = (name: string) => `/families/knee/values/${name}`

describe('what each altered value does alone', () => {
  let w: Walker
  const draft = async (edits: Edit[]) => {
    const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Tried', reason: 'Tried on the stand.' }).expect(201)).body as { key: string }
    await w.engineer.patch(`/api/changes/${key}/values`, { edits }).expect(200)
    return key
  }
  /** Asks until everything is computed, as the page does. */
  const effects = async (key: string): Promise<Map<string, RowEffect>> => {
    for (let i = 0; i < 200; i += 1) {
      const view = (await w.observer.get(`/api/changes/${key}/effects`).expect(200)).body as EffectsView
      if (view.progress.state !== 'running') return new Map(view.effects.map((e) => [e.row, e]))
      await new Promise((done) => setTimeout(done, 20))
    }
    throw new Error('the effects are not computed after 200 looks')
  }
  const effectOf = (all: Map<string, RowEffect>, row: string): ValueEffect => {
    const found = all.get(row)
    if (found?.kind !== 'effect') throw new Error(`${row}: ${JSON.stringify(found)}`)
    return found.effect
  }

  beforeAll(async () => {
    w = await aWalker()
    await through(w, await aDraft(w), '1.0.0')
  })

  it('is what the check says of a change that alters nothing else', async () => {
    const gain: Edit = { pointer: value('velocityGain'), from: 3.2, to: 4.4 }
    const together = await draft([gain, { pointer: value('positionGain'), from: 36, to: 50 }, { pointer: value('velocityWindow'), from: 14, to: 10 }])
    const alone = effectOf(await effects(together), 'value:l1-knee:velocityGain')
    const check = (await w.observer.get(`/api/changes/${await draft([gain])}/check`).expect(200)).body as CheckView
    const joint = check.joints.find((j) => j.joint === alone.joint)!
    const [before, after] = [joint.released!.loops[alone.loop!]!, joint.candidate!.loops[alone.loop!]!]
    const read = (f: typeof before) => (alone.figure === 'phase margin' ? f.phaseMarginDeg : f.gainMarginDb)
    expect(['phase margin', 'gain margin']).toContain(alone.figure)
    expect([alone.before, alone.after, alone.verdict]).toEqual([read(before), read(after), joint.candidate!.verdict])
    expect(alone.after).not.toBe(alone.before)
  })

  it('reads the registers back: a value that rounds to what stands there moves nothing', async () => {
    const all = await effects(await draft([{ pointer: value('velocityGain'), from: 3.2, to: 3.200000001 }]))
    expect(all.get('value:l1-knee:velocityGain')).toEqual({ row: 'value:l1-knee:velocityGain', kind: 'none', why: 'no figure of the loop moves' })
  })

  it('says when the loop turns unstable by it', async () => {
    const all = await effects(await draft([{ pointer: value('velocityGain'), from: 3.2, to: 7.9 }, { pointer: value('velocityWindow'), from: 14, to: 40 }]))
    const verdicts = ['velocityGain', 'velocityWindow'].map((p) => effectOf(all, `value:l1-knee:${p}`)).filter((e) => e.figure === 'verdict')
    expect(verdicts.length).toBeGreaterThan(0)
    for (const e of verdicts) expect(e).toMatchObject({ beforeReads: 'stable', afterReads: 'unstable', verdict: 'unstable' })
  })

  it('shows what a clamp lets through at the output: k_t · N · η · I', async () => {
    const all = await effects(await draft([{ pointer: value('currentLimit'), from: 2.6, to: 2.8 }]))
    const effect = effectOf(all, 'value:l1-knee:currentLimit')
    expect(effect).toMatchObject({ figure: 'torque at the clamp', unit: 'N·m', loop: null })
    expect(effect.after! / effect.before!).toBeCloseTo(2.8 / 2.6, 9)
  })

  it('covers the letters of a drive train', async () => {
    const { set } = (await w.observer.get('/api/changes/dunlin-1').expect(200)).body as { set: { families: { knee: { driveTrain: { L: number } } } } }
    const { L } = set.families.knee.driveTrain
    const all = await effects(await draft([{ pointer: '/families/knee/driveTrain/L', from: L, to: 0.0009 }]))
    expect(effectOf(all, 'drive-train:knee:L').loop).not.toBeNull()
  })

  it.each([
    ['an address', { pointer: '/joints/l1-knee/address', from: 0x33, to: 0x35 }, 'value:l1-knee:address', 'it is no value in a register'],
    ['a value that the model does not read', { pointer: value('busWatchdog'), from: 250, to: 200 }, 'value:l1-knee:busWatchdog', 'no figure of the loop moves'],
  ])('has nothing to say of %s', async (_what, edit, row, why) => expect((await effects(await draft([edit]))).get(row)).toEqual({ row, kind: 'none', why }))

  it('has nothing to compare a first set with', async () => {
    const first = await effects('dunlin-1')
    expect(first.size).toBeGreaterThan(10)
    for (const e of first.values()) expect(e).toMatchObject({ kind: 'none', why: 'nothing is released to compare with' })
  })
})

describe('the figure that moves most', () => {
  const loop = (phaseMarginDeg: number | null, gainMarginDb: number | null, bandwidthHz = 20) => ({ verdict: 'stable' as const, gainMarginDb, gainMarginReads: gainMarginDb === null ? 'above 60 dB' : '', gainMarginDownDb: null, phaseMarginDeg, phaseMarginReads: '', delayMarginS: null, sensitivityPeak: null, bandwidthHz, phaseMarginHz: null, gainMarginHz: null })
  const side = (velocity: ReturnType<typeof loop>, step: object | null = null): Side => ({
    figures: { verdict: 'stable', rho: 0.9, hyperperiodS: 0.001, decayRate: 10, slowestTimeConstantS: 0.1, eigenvalues: [], loops: { velocity }, step: step as never, heat: null },
    model: { plant: { k_t: 0.01, N: 100, eta: 0.5 }, firmware: { I_max: 2, omega_max: 6, d_max: 1 }, environment: { V_bus: 12 } } as Side['model'],
  })
  const moved = (a: Side, b: Side) => figureMoved(a, b, defaultPolicy, null)?.moved

  it('weighs margins in shares of 45° and 8 dB', () => {
    expect(moved(side(loop(60, 12)), side(loop(55, 11)))).toMatchObject({ figure: 'gain margin', before: 12, after: 11, policy: { limit: 8, forbidden: 'below' } })
    expect(moved(side(loop(60, 12)), side(loop(50, 11)))).toMatchObject({ figure: 'phase margin', before: 60, after: 50 })
  })

  it('looks first at margins that are not ample: below 90° and 16 dB', () => {
    expect(moved(side(loop(60, 24)), side(loop(57, 17)))).toMatchObject({ figure: 'phase margin', before: 60, after: 57 })
    expect(moved(side(loop(60, 24)), side(loop(60, 17)))).toMatchObject({ figure: 'gain margin', before: 24, after: 17 })
  })

  it('keeps the words where a margin has no number', () => expect(moved(side(loop(60, null)), side(loop(60, 30)))).toMatchObject({ figure: 'gain margin', before: null, beforeReads: 'above 60 dB', after: 30 }))

  it('falls back on bandwidth, then on the simulated step, then on nothing', () => {
    expect(moved(side(loop(60, 12, 20)), side(loop(60, 12, 24)))).toMatchObject({ figure: 'bandwidth', before: 20, after: 24 })
    const step = { settlingTimeS: 0.1, overshootPercent: 5, peakCurrentA: 1 }
    expect(moved(side(loop(60, 12), step), side(loop(60, 12), { ...step, settlingTimeS: null }))).toMatchObject({ figure: 'settling, 2 %', before: 0.1, after: null, afterReads: 'does not settle' })
    expect(moved(side(loop(60, 12), step), side(loop(60.05, 12), step))).toBeUndefined()
  })
})
