import { describe, expect, it } from 'vitest'
import type { MapCells } from '../../shared/contract/checks.ts'
import { analyse } from '../../server/control/analyse.ts'
import { stabilityMap } from '../../server/control/stability-map.ts'
import { sweepTolerance } from '../../server/control/tolerance.ts'
import { valuesOfAxis } from '../../server/jobs/analyses/map.ts'
import { request } from '../../server/jobs/analyses/requests.ts'
import { sweepPoints, valuesOfPoints } from '../../server/jobs/analyses/tolerance-points.ts'
import type { ToleranceResult } from '../../server/jobs/analyses/tolerance.ts'
import type { NominalResult } from '../../server/jobs/analyses/nominal.ts'
import type { CurvesResult } from '../../server/jobs/analyses/curves.ts'
import type { RetuneResult } from '../../server/jobs/analyses/retune.ts'
import { computeHere } from '../../server/jobs/flows.ts'
import { aBoard, aModel, aNominal, aSweep, bounds, settled, step } from './a-board.ts'

const resultOf = async <T>(asked: Parameters<typeof computeHere>[0]): Promise<T> => {
  const outcome = await computeHere(asked)
  if (outcome.kind === 'refused') throw new Error(outcome.text)
  return outcome.result as T
}

describe('a sweep', () => {
  it("agrees with the control core's own sweep at every vertex", async () => {
    const { figures } = await resultOf<ToleranceResult>(aSweep())
    const core = sweepTolerance(aModel(), Object.fromEntries(bounds.map((b) => [b.name, [b.low, b.high]])), { seed: 1, samples: 0, margins: true })
    expect(figures.vertices).toEqual(core.vertices)
    for (const loop of ['current', 'velocity', 'position'] as const) {
      const theirs = core.loops[loop]!.gainMarginDb
      const ours = figures.loops[loop]!.gainMarginDb!
      if (theirs.kind !== 'worst') throw new Error('the core found no margin')
      // samples lie inside the box, so that they may be worse only where a margin is not monotone
      expect(ours.value).toBeLessThanOrEqual(theirs.value)
      if (ours.at.kind === 'vertex') expect(ours.value).toBe(theirs.value)
    }
  })

  it('is the same however it is cut into pieces and wherever it runs', async () => {
    const here = await resultOf<ToleranceResult>(aSweep())
    const onBoard = (await settled(aBoard(), [aSweep()])).get(aSweep().hash)
    expect(onBoard).toEqual({ kind: 'result', result: here })
    expect(JSON.parse(JSON.stringify(here))).toEqual(here)
  })

  it('walks a supply that the firmware compensates once for both its bounds, and one that it does not twice', () => {
    const box = [{ name: 'V_bus', unit: 'V', nominal: 24, low: 21, high: 26.4 }, ...bounds]
    const rhos = (supply_compensated: boolean) => sweepPoints({ model: aModel({ supply_compensated }), bounds: box, vertexNames: box.map((b) => b.name) }, 0, 8).map((p) => p.rho)
    const same = rhos(true)
    for (let k = 0; k < 8; k += 2) expect(same[k + 1]).toBe(same[k])
    const apart = rhos(false)
    for (let k = 0; k < 8; k += 2) expect(apart[k + 1]).not.toBe(apart[k])
  })

  it('takes the high bound of the j-th name where bit j of a vertex is set', () => {
    const values = valuesOfPoints({ model: aModel(), bounds, vertexNames: ['k_t', 'J_load'] }, 0, 4)
    expect(values).toEqual([{ k_t: 0.0296, J_load: 0.013 }, { k_t: 0.034, J_load: 0.013 }, { k_t: 0.0296, J_load: 0.0296 }, { k_t: 0.034, J_load: 0.0296 }])
  })

  it('finds no step to run where no corner is stable', async () => {
    const { figures, traces } = await resultOf<ToleranceResult>(aSweep({ K_pv: 30 }))
    expect(figures).toMatchObject({ stepsRun: 0, stepAtWorst: null, peakCurrentA: null, vertices: { stable: 0 } })
    expect(traces).toBeNull()
  })
})

describe('the nominal analysis', () => {
  it('carries the linear report, and time histories of at most 400 samples', async () => {
    const { figures, traces } = await resultOf<NominalResult>(aNominal())
    const report = analyse(aModel())
    expect(figures.rho).toBe(report.rho)
    expect(figures.loops.velocity!.bandwidthHz).toBe(report.loops.velocity!.bandwidths!.relative.kind === 'bandwidth' ? report.loops.velocity!.bandwidths!.relative.hz : null)
    expect(traces!.t.length).toBeLessThanOrEqual(400)
    expect(traces!.theta.at(-1)).toBeCloseTo(0.2, 3)
    expect(figures.step!.peakCurrentA).toBeGreaterThan(1)
  })

  it('runs no step of a loop that is not stable', async () => {
    const { figures, traces } = await resultOf<NominalResult>(aNominal({ K_pv: 30 }))
    expect([figures.verdict, figures.step, traces]).toEqual(['unstable', null, null])
  })
})

describe('curves', () => {
  it('pass 0 dB where the phase margin is read off, with that phase to −180°', async () => {
    const curves = await resultOf<CurvesResult>(request('curves', { model: aModel() }))
    const { figures } = await resultOf<NominalResult>(aNominal())
    for (const loop of ['current', 'velocity', 'position'] as const) {
      const c = curves[loop]!
      expect(c.hz).toHaveLength(300)
      const k = c.hz.findIndex((hz) => hz > figures.loops[loop]!.phaseMarginHz!)
      const t = (figures.loops[loop]!.phaseMarginHz! - c.hz[k - 1]) / (c.hz[k] - c.hz[k - 1])
      // straight lines between 300 points
      expect(c.openDb[k - 1] + t * (c.openDb[k] - c.openDb[k - 1])).toBeCloseTo(0, 1)
      expect(180 + c.openPhaseDeg[k - 1] + t * (c.openPhaseDeg[k] - c.openPhaseDeg[k - 1])).toBeCloseTo(figures.loops[loop]!.phaseMarginDeg!, 0)
    }
  })
})

describe('a map', () => {
  const asked = request('map', { model: aModel(), x: { parameter: 'K_pv', low: 1, high: 12, count: 5 }, y: { parameter: 'K_pp', low: 10, high: 60, count: 4 } })
  it("agrees with the control core's map", async () => {
    const cells = await resultOf<MapCells>(asked)
    const { x, y } = asked.inputs
    const core = stabilityMap(aModel(), { parameter: 'K_pv', values: valuesOfAxis('x', x) }, { parameter: 'K_pp', values: valuesOfAxis('y', y) }, { margins: true })
    expect(cells.rho).toEqual(Array.from(core.rho))
    expect(cells.verdicts.filter((v) => v !== 'stable').length).toBeGreaterThan(2)
    expect(cells.phaseMarginDeg).toEqual(core.phaseMarginDeg!.map((m) => (m.kind === 'margin' ? Number(m.value.toPrecision(6)) : null)))
  })
  it('holds whole numbers on an axis that is counted', async () => {
    const cells = await resultOf<MapCells>(request('map', { model: aModel(), x: { parameter: 'W', low: 1, high: 4, count: 10 }, y: { parameter: 'K_pp', low: 10, high: 60, count: 2 } }))
    expect(cells.rho).toHaveLength(8)
  })
})

describe('a retune', () => {
  it('tells how many it tried, and never proposes worse', async () => {
    const told: number[] = []
    const asked = request('retune', { model: aModel(), bounds, gains: { K_pv: [0.5, 1.5] }, bandwidthHz: { velocity: 30 }, peakCurrent: { limit: 3, step }, tries: 12 })
    const board = aBoard()
    board.listen('retune', () => told.push(board.progressOf('retune').done))
    await board.follow('retune', [asked], 1)
    const outcome = (await settled(board, [asked])).get(asked.hash)
    if (outcome?.kind !== 'result') throw new Error('it was refused')
    const found = outcome.result as RetuneResult
    expect(found.after).toBeGreaterThanOrEqual(found.before)
    expect(found.gains.K_pv).toBeGreaterThanOrEqual(1.6)
    expect(found.tried).toBeLessThanOrEqual(12)
    expect(Math.max(...told)).toBe(12)
  })
})
