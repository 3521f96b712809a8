/** Step responses with published figures; each entry of step-metrics.json carries its source. */
import { describe, expect, it } from 'vitest'
import { Drive } from '../../../../server/control/simulation/drive.ts'
import { stepMetrics } from '../../../../server/control/simulation/metrics.ts'
import type { StepMetrics } from '../../../../server/control/simulation/metrics.ts'
import { bareMotor } from '../joints.ts'
import { differenceEquation, polynomial, stepOfTransferFunction } from '../sampled-step.ts'
import entries from './step-metrics.json'

interface Entry {
  id: string
  source: string
  inputs: { [name: string]: unknown }
  expected: { [name: string]: number } | number[]
  tolerance: { abs?: number; rel?: number; fields?: { [name: string]: number } }
  recomputed: { [name: string]: number } | number[]
}

function entry(id: string): Entry {
  const found = (entries as unknown as Entry[]).find((e) => e.id === id)
  if (found === undefined) throw new Error(`no entry ${id}`)
  return found
}

function seconds(time: StepMetrics['riseTime'] | StepMetrics['settlingTime']): number {
  return time.kind === 'time' ? time.seconds : NaN
}

/** Each expected figure against the published value within its stated tolerance, and against the recomputed one within `fine`. */
function agrees(e: Entry, got: { [name: string]: number }, fine: number): void {
  for (const [name, value] of Object.entries(e.expected as { [name: string]: number })) {
    const tolerance = e.tolerance.fields?.[name] ?? e.tolerance.abs ?? Math.abs(value) * (e.tolerance.rel ?? 0)
    expect(got, `${e.id} ${e.source}`).toHaveProperty(name)
    expect(Math.abs(got[name] - value), `${e.id} ${name}: ${got[name]} for ${value} (${e.source})`).toBeLessThanOrEqual(tolerance)
  }
  const recomputed = e.recomputed as { [name: string]: number }
  for (const name of Object.keys(got)) {
    if (recomputed[name] === undefined) continue
    const scale = Math.max(1, Math.abs(recomputed[name]))
    expect(Math.abs(got[name] - recomputed[name]), `${e.id} ${name} recomputed`).toBeLessThanOrEqual(fine * scale)
  }
}

describe('published step metrics', () => {
  it('names a source for every entry and leaves none out', () => {
    const all = (entries as unknown as Entry[]).map((e) => e.id)
    expect((entries as unknown as Entry[]).every((e) => e.source.length > 10)).toBe(true)
    expect(all.filter((id) => !TESTED.includes(id) && !id.startsWith('step.2nd.'))).toEqual([])
  })

  it('speed of a motor on a 1 V step', () => {
    const drive = new Drive(bareMotor({ J: 0.01, b: 0.1, K: 0.01, R: 1, L: 0.5, unit: 0.001 }))
    drive.v = 1
    const y = new Float64Array(8001)
    for (let k = 1; k < y.length; k++) {
      drive.advance(1)
      y[k] = drive.x[1]
    }
    const to = 0.01 / (0.1 * 1 + 0.01 ** 2)
    const m = stepMetrics({ response: y, dt: 0.001, from: 0, to })
    agrees(entry('disc.ctms.speed.step'), { final: y[y.length - 1], settling2pct: seconds(m.settlingTime) }, 1e-6)
  })

  it('position of a motor under a sampled controller', () => {
    const e = entry('step.ctms.pos.cl')
    const drive = new Drive(bareMotor({ J: 3.2284e-6, b: 3.5077e-6, K: 0.0274, R: 4, L: 2.75e-6, unit: 0.001 }))
    const controller = differenceEquation(polynomial(800, [0.95, 0.8, 0.8]), polynomial(1, [-0.98, 0.6, 1]))
    const y = new Float64Array(301)
    for (let k = 1; k < y.length; k++) {
      drive.v = controller(1 - drive.x[2])
      drive.advance(1)
      y[k] = drive.x[2]
    }
    const m = stepMetrics({ response: y, dt: 0.001, from: 0, to: 1, crossings: 'whole samples' })
    agrees(e, { overshoot_pct: 100 * m.overshoot, settling_s: seconds(m.settlingTime) }, 1e-9)
  })

  it.each(['sim.diffeq.eglm03', 'sim.diffeq.pc'])('difference equation %s (the helper that the sampled controller above rests on)', (id) => {
    const e = entry(id)
    const push = id === 'sim.diffeq.pc' ? differenceEquation([1], [1, 1, 0.25]) : differenceEquation([4, 0, -16], [1, 0, -0.25])
    const expected = e.expected as number[]
    expected.forEach((value) => expect(Math.abs(push(1) - value), e.source).toBeLessThanOrEqual(e.tolerance.abs ?? 0))
  })

  it.each([0.1, 0.2, 0.4, 0.5, 0.6, 0.7, 0.7071, 0.8, 0.9])('second order, damping %s', (damping) => {
    const e = entry(`step.2nd.z${damping}`)
    const zeta = e.inputs.zeta as number
    // 2e-4 of the natural period's unit: the sampled peak lies within 1e-4 of the true one, below the tolerance of 5e-4.
    const dt = 2e-4
    const y = stepOfTransferFunction([1], [1, 2 * zeta, 1], dt, 300_001)
    const m = stepMetrics({ response: y, dt, from: 0, to: 1 })
    agrees(e, { overshoot_pct: 100 * m.overshoot, tp: m.peakTime, tr_10_90: seconds(m.riseTime), ts2: seconds(m.settlingTime) }, 2e-4)
  })

  it('fourth order with zeros', () => {
    const dt = 1e-3
    const y = stepOfTransferFunction([1, 5, 5], [1, 1.65, 5, 6.5, 2], dt, 80_001)
    const m = stepMetrics({ response: y, dt, from: 0, to: 2.5 })
    agrees(
      entry('step.ml.stepinfo1'),
      { RiseTime: seconds(m.riseTime), SettlingTime: seconds(m.settlingTime), Overshoot: 100 * m.overshoot, Peak: m.peak, PeakTime: m.peakTime },
      2e-5,
    )
  })

  it('third order with zeros, two settling bands', () => {
    const dt = 1e-4
    const y = stepOfTransferFunction([8, 18, 32], [1, 6, 14, 24], dt, 100_001)
    const to = 32 / 24
    const m = stepMetrics({ response: y, dt, from: 0, to })
    const narrow = stepMetrics({ response: y, dt, from: 0, to, band: 0.005 })
    agrees(
      entry('step.ml.stepinfo2'),
      {
        RiseTime: seconds(m.riseTime),
        SettlingTime: seconds(m.settlingTime),
        Overshoot: 100 * m.overshoot,
        Peak: m.peak,
        Settling0_5pct: seconds(narrow.settlingTime),
        PeakTime: m.peakTime,
      },
      2e-4,
    )
  })

  it('discrete system, whole samples', () => {
    const y = new Float64Array(201)
    let [a, b] = [0, 0]
    for (let k = 0; k < y.length; k++) {
      y[k] = -1.53 * b
      ;[a, b] = [0.68 * a - 0.34 * b + 0.18, 0.34 * a + 0.68 * b + 0.04]
    }
    // The steady state of x = A·x + B: det(I − A) = 0.32² + 0.34².
    const steady = (-1.53 * (0.34 * 0.18 + 0.32 * 0.04)) / (0.32 ** 2 + 0.34 ** 2)
    const m = stepMetrics({ response: y, dt: 0.2, from: 0, to: steady, crossings: 'whole samples' })
    agrees(
      entry('step.ml.discrete'),
      {
        RiseTime: seconds(m.riseTime),
        SettlingTime: seconds(m.settlingTime),
        Overshoot: 100 * m.overshoot,
        Peak: Math.abs(m.peak),
        PeakTime: m.peakTime,
        Final: steady,
      },
      1e-9,
    )
  })
})

const TESTED = ['disc.ctms.speed.step', 'step.ctms.pos.cl', 'sim.diffeq.eglm03', 'sim.diffeq.pc', 'step.ml.stepinfo1', 'step.ml.stepinfo2', 'step.ml.discrete']
