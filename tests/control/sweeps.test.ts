import { describe, expect, it } from 'vitest'
import { analyse } from '../../server/control/analyse.ts'
import { NumericError } from '../../server/control/errors.ts'
import { limitAbove } from '../../server/control/limit-search.ts'
import type { JointModel } from '../../server/control/model.ts'
import { etaRange, withValues } from '../../server/control/parameters.ts'
import { latinHypercube } from '../../server/control/random.ts'
import { axisValues, joinMaps, MAP_VERDICTS, StabilityMap, stabilityMap } from '../../server/control/stability-map.ts'
import { sweepTolerance, ToleranceSweep } from '../../server/control/tolerance.ts'
import { verdict } from '../../server/control/verdict.ts'
import { MOTORS } from './random-joints.ts'

const model: JointModel = { plant: MOTORS[0].plant, firmware: MOTORS[0].firmware, environment: { V_bus: 12, T_winding: 25 } }
const { plant } = model
const box = { R: [14, 18], L: [0.001, 0.0016], J_load: [1e-4, 4e-4], T_winding: [0, 105] } as const

const code = (run: () => unknown): string => {
  try {
    run()
  } catch (error) {
    if (error instanceof NumericError) return error.code
  }
  return 'no error'
}

describe('a tolerance sweep', () => {
  it('evaluates every vertex in order, and reports the worst with its place', () => {
    const report = sweepTolerance(model, box, { seed: 1, samples: 32, margins: false })
    expect(report.vertices.points).toBe(16)
    expect(report.samples.points).toBe(32)
    for (const k of [0, 5, 10, 15]) {
      const values = report.names.map((name, j) => box[name as keyof typeof box][Math.floor(k / 2 ** j) % 2])
      // Another start of the root's search ends within rounding.
      expect(Math.abs(report.rhoOfVertices[k] - verdict(withValues(model, report.names, values)).rho)).toBeLessThanOrEqual(1e-14)
    }
    if (report.worstRho.kind !== 'worst') throw new Error('a sweep has a worst point')
    const { at, value } = report.worstRho
    expect(value).toBe(Math.max(...report.rhoOfVertices, ...report.rhoOfSamples))
    expect(Math.abs(verdict(withValues(model, report.names, report.names.map((name) => at.values[name]))).rho - value)).toBeLessThanOrEqual(1e-14)
  })

  it('is the same in pieces as at once, and the same for the same seed', () => {
    const options = { seed: 7, samples: 20, margins: true }
    const sweep = new ToleranceSweep(model, box, options)
    let pieces = 0
    while (!sweep.step(7)) {
      expect(sweep.done).toBe(7 * ++pieces)
      expect(pieces).toBeLessThan(20)
    }
    expect(sweep.report()).toEqual(sweepTolerance(model, box, options))
    expect(sweepTolerance(model, box, { ...options, seed: 8 }).rhoOfSamples).not.toEqual(sweep.report().rhoOfSamples)
  })

  it('finds the worst margins that the report of each vertex shows', () => {
    const report = sweepTolerance(model, { J_load: box.J_load, T_winding: box.T_winding }, { seed: 0, samples: 0, margins: true })
    for (const closure of ['current', 'velocity', 'position'] as const) {
      const single = [0, 1, 2, 3].map((k) => analyse(withValues(model, report.names, [box.J_load[k % 2], box.T_winding[Math.floor(k / 2)]])).loops[closure])
      const phases = single.map((loop) => (loop?.phase.kind === 'margin' ? loop.phase.phaseMarginDeg : Infinity))
      const worst = report.loops[closure]?.phaseMarginDeg
      if (worst?.kind !== 'worst') throw new Error('every loop has a phase margin here')
      expect(worst.value).toBeCloseTo(Math.min(...phases), 9)
      expect(worst.at).toMatchObject({ kind: 'vertex', index: phases.indexOf(Math.min(...phases)) })
    }
  })

  it('takes the ten bounds that matter most when there are more, says which, and samples all', () => {
    const eleven = { ...box, V_bus: [11, 13], k_t: [0.0065, 0.008], eta: [0.28, 1], b_load: [0.001, 0.002], R_on: [0.4, 0.6], J_rotor: [1.4e-8, 1.6e-8], V_nom: [12, 12.0001], N: [249.9, 250.1] } as const
    const sweep = new ToleranceSweep(model, eleven, { seed: 3, margins: false })
    expect(sweep.names).toHaveLength(12)
    expect(sweep.vertexNames).toHaveLength(10)
    expect(sweep.total).toBe(1024 + 1024)
    const { ranking } = sweep.report()
    expect(ranking).toHaveLength(12)
    // With the supply compensated neither the supply nor its nominal value moves anything.
    expect(sweep.vertexNames).not.toContain('V_nom')
    expect(sweep.vertexNames).not.toContain('V_bus')
    expect(ranking?.slice(0, 10).map((s) => s.name).sort()).toEqual([...sweep.vertexNames].sort())
  })

  it.each<[string, Record<string, [number, number]>, string]>([
    ['crossed bounds', { R: [18, 14] }, 'bounds-crossed'],
    ['bounds that are not finite', { R: [14, NaN] }, 'not-finite'],
    ['an unknown name', { wobble: [1, 2] }, 'unknown-parameter'],
    ['a value that this joint does not have', { k_s: [1, 2] }, 'bad-input'],
    ['k_t and k_e apart', { k_t: [0.006, 0.008], k_e: [0.006, 0.008] }, 'bad-input'],
  ])('refuses %s', (_, bad, expected) => {
    expect(code(() => new ToleranceSweep(model, bad, { seed: 1, margins: false }))).toBe(expected)
  })

  it('refuses samples without end and seeds that are none', () => {
    expect(code(() => new ToleranceSweep(model, box, { seed: 1, margins: false, samples: 1e9 }))).toBe('out-of-range')
    expect(code(() => new ToleranceSweep(model, box, { seed: -1, margins: false }))).toBe('out-of-range')
  })

  it('moves k_e with k_t, and knows how a gear drives and is driven back', () => {
    const moved = withValues(model, ['k_t'], [plant.k_t * 1.1])
    expect(moved.plant.k_e).toBeCloseTo(plant.k_e * 1.1, 15)
    expect(etaRange({ eta: 0.8 })).toEqual({ low: 0.8, high: 1 / 0.75, backDrives: true })
    expect(etaRange({ eta: 0.28 })).toEqual({ low: 0.28, high: 1, backDrives: false })
    expect(code(() => etaRange({ eta: 1.2 }))).toBe('out-of-range')
  })
})

describe('the Latin hypercube', () => {
  it('puts one sample into each slice of each axis, repeatably', () => {
    const cube = latinHypercube(100, 5, 42)
    expect(latinHypercube(100, 5, 42)).toEqual(cube)
    for (let d = 0; d < 5; d++) {
      const slices = Array.from({ length: 100 }, (_, k) => Math.floor(cube[k * 5 + d] * 100)).sort((a, b) => a - b)
      expect(slices).toEqual(Array.from({ length: 100 }, (_, k) => k))
    }
  })
})

describe('a stability map', () => {
  const x = { parameter: 'K_pv', low: plant.k_t, high: 1, count: 6 }
  const y = { parameter: 'K_pp', low: 10, high: 60, count: 4 }

  it('gives each cell what the joint of that cell gets by itself', () => {
    const map = stabilityMap(model, x, y, { margins: true })
    for (let k = 0; k < 24; k++) {
      const single = analyse(withValues(model, ['K_pv', 'K_pp'], [map.x[k % 6], map.y[Math.floor(k / 6)]]))
      expect(Math.abs(map.rho[k] - single.rho)).toBeLessThanOrEqual(1e-11)
      expect(MAP_VERDICTS[map.verdicts[k]]).toBe(single.verdict)
      const loops = Object.values(single.loops)
      const cell = map.phaseMarginDeg?.[k]
      if (single.verdict !== 'stable' || loops.some((loop) => loop.verdict !== 'stable')) {
        expect(cell).toEqual({ kind: 'unstable' })
      } else {
        const phases = loops.map((loop) => (loop.phase.kind === 'margin' ? loop.phase.phaseMarginDeg : Infinity))
        expect(cell?.kind === 'margin' ? cell.value : NaN).toBeCloseTo(Math.min(...phases), 9)
      }
    }
    expect(new Set(map.verdicts).size).toBeGreaterThan(1)
  })

  it('is the same when other values than outer laws vary, and in pieces', () => {
    const axes = [{ parameter: 'K_pc', values: [2, 5, 9] }, { parameter: 'J_load', values: [1e-4, 3e-4] }] as const
    const map = new StabilityMap(model, axes[0], axes[1], { margins: false })
    while (!map.step(4)) expect(map.done).toBeLessThan(6)
    const report = map.report()
    for (let k = 0; k < 6; k++) expect(report.rho[k]).toBeCloseTo(analyse(withValues(model, ['K_pc', 'J_load'], [axes[0].values[k % 3], axes[1].values[Math.floor(k / 3)]])).rho, 11)
    expect(report.phaseMarginDeg).toBeNull()
  })

  it('joins rows of several workers to exactly the whole', () => {
    const parts = [[0, 1], [1, 4]].map((rows) => stabilityMap(model, x, y, { margins: true, rows: rows as [number, number] }))
    expect(joinMaps(parts)).toEqual(stabilityMap(model, x, y, { margins: true }))
    expect(code(() => stabilityMap(model, x, y, { margins: false, rows: [2, 9] }))).toBe('out-of-range')
  })

  it('spaces an axis in equal ratios where its ends are further apart than 20', () => {
    expect([...axisValues('x', { parameter: 'K_pv', low: 1, high: 100, count: 3 })]).toEqual([1, 10, 100])
    expect([...axisValues('x', { parameter: 'K_pv', low: 1, high: 3, count: 3 })]).toEqual([1, 2, 3])
    expect([...axisValues('x', { parameter: 'K_pv', low: -1, high: 100, count: 3 })]).toEqual([-1, 49.5, 100])
  })

  it.each<[string, () => unknown, string]>([
    ['crossed ends', () => stabilityMap(model, { ...x, low: 2 }, y, { margins: false }), 'bounds-crossed'],
    ['too many cells', () => stabilityMap(model, { ...x, count: 1000 }, { ...y, count: 1000 }, { margins: false }), 'too-large'],
    ['one parameter twice', () => stabilityMap(model, x, { ...y, parameter: 'K_pv' }, { margins: false }), 'bad-input'],
    ['an unknown parameter', () => stabilityMap(model, { ...x, parameter: 'name' }, y, { margins: false }), 'unknown-parameter'],
    ['no values', () => stabilityMap(model, { parameter: 'K_pv', values: [] }, y, { margins: false }), 'bad-input'],
    ['values that are not finite', () => stabilityMap(model, { parameter: 'K_pv', values: [1, Infinity] }, y, { margins: false }), 'not-finite'],
  ])('refuses %s', (_, run, expected) => {
    expect(code(run)).toBe(expected)
  })
})

describe('the limit of a gain', () => {
  it('is where ρ passes 1', () => {
    const limit = limitAbove(model, 'K_pv', 10)
    if (limit.kind !== 'limit') throw new Error('there is a limit')
    const at = (K: number): number => verdict(withValues(model, ['K_pv'], [K])).rho
    expect(at(limit.value * (1 - 1e-9))).toBeLessThan(1)
    expect(at(limit.value * (1 + 1e-9))).toBeGreaterThan(1)
  })

  it('is told apart from none, and found from a gain of 0', () => {
    expect(limitAbove(model, 'K_pv', 0.3)).toEqual({ kind: 'none-up-to', limit: 0.3 })
    const open = { ...model, firmware: { ...model.firmware, K_pp: 0 } }
    const from0 = limitAbove(open, 'K_pp', 1e5)
    const fromSome = limitAbove(model, 'K_pp', 1e5)
    if (from0.kind !== 'limit' || fromSome.kind !== 'limit') throw new Error('both have the limit')
    expect(Math.abs(from0.value / fromSome.value - 1)).toBeLessThan(1e-9)
  })
})
