import { describe, expect, it } from 'vitest'
import { analyse } from '../../../server/control/analyse.ts'
import type { JointModel } from '../../../server/control/model.ts'
import { simulate } from '../../../server/control/simulation/simulate.ts'
import { sweepTolerance } from '../../../server/control/tolerance.ts'
import { robustRetune } from '../../../server/control/tuning/robust-retune.ts'
import type { RetuneOptions, RetuneResult } from '../../../server/control/tuning/robust-retune.ts'
import { aStep, rigidJoint } from '../simulation/joints.ts'

/** A velocity loop with too much gain, so that there is something to find. */
const HOT = rigidJoint({ firmware: { K_pv: 0.3, K_iv: 20 } })
const BOX = { J_load: [1e-4, 4e-4], k_t: [0.0065, 0.008] } as const
const OPTIONS: RetuneOptions = {
  gains: { K_pv: [0.3, 3], K_iv: [0.1, 10] },
  box: BOX,
  constraints: { bandwidthHz: { velocity: 30 } },
  seed: 4,
  tries: 60,
}

function run(model: JointModel, options: RetuneOptions): { result: RetuneResult; yields: number } {
  const search = robustRetune(model, options)
  let yields = 0
  for (;;) {
    const next = search.next()
    if (next.done === true) return { result: next.value, yields }
    yields++
  }
}

describe('robust retune', () => {
  it('raises the worst margin over the vertices and keeps the bandwidth, as the sweep and the analysis see it', () => {
    const { result, yields } = run(HOT, OPTIONS)
    expect(result.outcome).toBe('better')
    expect(result.bestScore.worst).toBeGreaterThan(result.before.worst + 0.2)
    expect(yields).toBe(result.tried)
    const model = { ...HOT, firmware: { ...HOT.firmware, ...result.best } }
    const sweep = sweepTolerance(model, BOX, { seed: 1, samples: 0, margins: true })
    const worst = sweep.loops.velocity?.phaseMarginDeg
    const nominal = analyse(model).loops.velocity
    const phase = Math.min(worst?.kind === 'worst' ? worst.value : NaN, nominal?.phase.kind === 'margin' ? nominal.phase.phaseMarginDeg : NaN)
    expect(result.bestScore.loops.velocity?.phaseMarginDeg).toBeCloseTo(phase, 6)
    const bandwidth = nominal?.bandwidths?.relative
    expect(bandwidth?.kind === 'bandwidth' ? bandwidth.hz : NaN).toBeGreaterThanOrEqual(30)
    expect(result.bestScore.violation).toBe(0)
  })

  it('stays within its bounds and tries, and repeats itself for one seed', () => {
    const narrow: RetuneOptions = { ...OPTIONS, gains: { K_pv: [0.9, 1.1], K_iv: [0.9, 1.1] }, tries: 25 }
    const [a, b] = [run(HOT, narrow).result, run(HOT, narrow).result]
    expect(b).toEqual(a)
    expect(a.tried).toBeLessThanOrEqual(25)
    expect(a.best.K_pv).toBeGreaterThanOrEqual(0.27 * (1 - 1e-12))
    expect(a.best.K_iv).toBeGreaterThanOrEqual(18 * (1 - 1e-12))
    expect(a.best.K_iv).toBeLessThanOrEqual(22 * (1 + 1e-12))
  })

  it('leaves room for a bandwidth that the present gains miss', () => {
    const slow = rigidJoint({ firmware: { K_pv: 0.05, K_iv: 1 } })
    const { result } = run(slow, { ...OPTIONS, gains: { K_pv: [0.5, 10], K_iv: [0.5, 10] }, box: {} })
    expect(result.before.violation).toBeGreaterThan(0)
    expect(result.bestScore.violation).toBe(0)
    expect(result.bestScore.bandwidthHz.velocity).toBeGreaterThanOrEqual(30)
  })

  it('keeps the peak current of a run and the ripple of the velocity quantum below their limits', () => {
    const step = aStep({ step_to: 0.05, t_end: 0.1 })
    const present = simulate(HOT, step).metrics.peakCurrent
    const constraints = { peakCurrent: { limit: 0.8 * present, run: step }, quantumRipple: 0.024 }
    const { result } = run(HOT, { ...OPTIONS, gains: { K_pv: [0.3, 3], K_pp: [0.3, 3] }, constraints })
    const model = { ...HOT, firmware: { ...HOT.firmware, ...result.best } }
    expect(simulate(model, step).metrics.peakCurrent).toBeLessThanOrEqual(0.8 * present)
    expect(result.bestScore.quantumRipple).toBeLessThanOrEqual(0.024)
    expect(result.bestScore.peakCurrent).toBe(simulate(model, step).metrics.peakCurrent)
  })

  it('can be stopped after any trial', () => {
    const search = robustRetune(HOT, OPTIONS)
    const first = search.next()
    expect(first.done).toBe(false)
    expect(search.return(undefined as never).done).toBe(true)
    expect(search.next().done).toBe(true)
  })

  it.each<[string, string, Partial<RetuneOptions>]>([
    ['gains', 'bad-input', { gains: {} }],
    ['K_ip', 'out-of-range', { gains: { K_ip: [0.5, 2] } }],
    ['gains.K_pv', 'out-of-range', { gains: { K_pv: [1.5, 2] } }],
    ['J_load', 'bounds-crossed', { box: { J_load: [4e-4, 1e-4] } }],
    ['mass', 'unknown-parameter', { box: { mass: [1, 2] } }],
    ['plant.J_load', 'out-of-range', { box: { J_load: [-1e-4, 1e-4] } }],
    ['tries', 'out-of-range', { tries: 0 }],
  ])('refuses %s: %s', (field, code, change) => {
    expect(() => run(HOT, { ...OPTIONS, ...change })).toThrow(expect.objectContaining({ code, details: expect.objectContaining({ field }) }))
  })
})
