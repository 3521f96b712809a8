import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { analyse, type LoopReport } from '../../server/control/analyse.ts'
import { integratorLimit, lockedRotorLimit, windingPole, windowDelay } from '../../server/control/closed-forms.ts'
import { complexMatrix } from '../../server/control/complex-matrix.ts'
import { NumericError } from '../../server/control/errors.ts'
import { frequencyResponse } from '../../server/control/frequency-response.ts'
import { liftPlant } from '../../server/control/lifted-plant.ts'
import { LongSource } from '../../server/control/long-source.ts'
import { OuterSource } from '../../server/control/margin-sources.ts'
import { marginsOf } from '../../server/control/margins.ts'
import type { ControlMode, JointModel } from '../../server/control/model.ts'
import { outerSteps } from '../../server/control/outer-steps.ts'
import { OuterTransfer } from '../../server/control/outer-transfer.ts'
import { resistanceAt } from '../../server/control/plant.ts'
import { sampleJoint } from '../../server/control/sampled-joint.ts'
import { largestSingularValue, singularValueBound } from '../../server/control/singular-value.ts'
import { MOTORS, plausibleJoint } from './random-joints.ts'

const base: JointModel = { plant: MOTORS[0].plant, firmware: MOTORS[0].firmware, environment: { V_bus: 12, T_winding: 25 } }
const magnitudes = (model: JointModel, loop: ControlMode, hz: number[]): number[] => {
  const { T_re, T_im } = frequencyResponse(model, loop, hz)
  return hz.map((_, k) => Math.hypot(T_re[k], T_im[k]))
}

describe('bandwidth', () => {
  it('is the first fall to −3 dB that a fine scan of |T| finds, over random joints', () => {
    fc.assert(
      fc.property(plausibleJoint, (model) => {
        const report = analyse(model)
        for (const [closure, loop] of Object.entries(report.loops) as [ControlMode, LoopReport][]) {
          if (!loop.bandwidths) continue
          const half = (closure === 'current' ? model.firmware.f_c : model.firmware.f_o) / 2
          const hz = Array.from({ length: 1500 }, (_, k) => 1e-3 * (half / 1e-3) ** (k / 1499))
          const T = magnitudes(model, closure, hz)
          // Zero frequency: the slowest loops have not levelled off at the scan's first point.
          if (Math.abs(T[0] / Math.abs(loop.bandwidths.dcGain) - 1) > 1e-3) continue
          const level = 10 ** (-3 / 20) * Math.abs(loop.bandwidths.dcGain)
          const k = T.findIndex((t) => t <= level)
          const { relative } = loop.bandwidths
          if (relative.kind === 'bandwidth') {
            expect(Math.abs(magnitudes(model, closure, [relative.hz])[0] / level - 1)).toBeLessThanOrEqual(1e-9)
            if (k > 0) expect(relative.hz).toBeLessThanOrEqual(hz[k] * (1 + 1e-9))
            for (let i = 0; i < T.length && hz[i] < relative.hz * (1 - 1e-9); i++) expect(T[i]).toBeGreaterThan(level)
          } else {
            expect(k).toBe(-1)
          }
        }
      }),
      { seed: 6, numRuns: 40 },
    )
  })

  it('is 1 at zero frequency for a loop with an integrator', () => {
    const { loops } = analyse(base)
    for (const loop of Object.values(loops)) expect(loop.bandwidths?.dcGain).toBeCloseTo(1, 9)
  })

  it('is that of a resistance behind a proportional current law without one', () => {
    const { plant, firmware } = base
    const { loops } = analyse({ ...base, plant: { ...plant, k_e: 0 }, firmware: { ...firmware, mode: 'current', K_ic: 0 } })
    expect(loops.current?.bandwidths?.dcGain).toBeCloseTo(firmware.K_pc / (firmware.K_pc + plant.R + plant.R_on), 12)
  })
})

describe('frequency responses', () => {
  it('show the window’s own delay at low frequency', () => {
    const { W, f_o } = base.firmware
    const joint = sampleJoint(base)
    const transfer = new OuterTransfer(joint, liftPlant(outerSteps(joint)))
    const omega = 0.5
    transfer.at(omega / f_o)
    // ω̂ over the speed: the window's W increments against one increment's own half tick.
    const phase = Math.atan2(transfer.window.im[0], transfer.window.re[0]) - (omega / f_o) * 0.5
    expect(-phase / omega).toBeCloseTo(windowDelay(W, 1 / f_o), 9)
  })

  it('refuse a loop that the joint does not close, and frequencies that are none', () => {
    const codes = [() => frequencyResponse({ ...base, firmware: { ...base.firmware, mode: 'velocity' } }, 'position', [1]), () => frequencyResponse(base, 'velocity', [0]), () => frequencyResponse(base, 'velocity', [NaN])].map((run) => {
      try {
        run()
      } catch (error) {
        if (error instanceof NumericError) return error.code
      }
      return 'no error'
    })
    expect(codes).toEqual(['bad-input', 'out-of-range', 'not-finite'])
  })
})

describe('two ways to lift a loop', () => {
  it('laws times plant, and the loop lifted whole, have the same margins', () => {
    let compared = 0
    fc.assert(
      fc.property(plausibleJoint, (model) => {
        const joint = sampleJoint(model)
        if (joint.closes === 'current') return
        const steps = outerSteps(joint)
        const plant = liftPlant(steps)
        const report = analyse(model)
        for (const closure of ['velocity', 'position'] as const) {
          if (report.loops[closure]?.verdict !== 'stable') continue
          const a = marginsOf(new OuterSource(joint, plant, closure))
          const b = marginsOf(new LongSource(joint, steps, closure, []))
          for (const key of ['gainUp', 'gainDown', 'phase', 'delay', 'M_s', 'Ms_lifted_norm'] as const) {
            const [x, y] = [a[key], b[key]] as unknown as [Record<string, unknown>, Record<string, unknown>]
            expect(x.kind).toBe(y.kind)
            for (const [field, value] of Object.entries(x)) if (typeof value === 'number' && field !== 'hz') expect(Math.abs((y[field] as number) / value - 1)).toBeLessThanOrEqual(1e-6)
          }
          compared++
        }
      }),
      { seed: 12, numRuns: 40 },
    )
    expect(compared).toBeGreaterThan(15)
  })
})

describe('the largest singular value', () => {
  it('by a Lanczos process is that of all eigenvalues, and lies under its bound', () => {
    for (const n of [13, 40]) {
      const S = complexMatrix(n)
      for (let k = 0; k < n * n; k++) {
        S.re[k] = Math.sin(3 * k + 1) / 3 + (k % (n + 1) === 0 ? 1 : 0)
        S.im[k] = Math.cos(5 * k) / 4
      }
      // The same by brute power iteration on SᴴS.
      let x = Array.from({ length: n }, (_, k) => [1, 0.1 * k])
      let sigma = 0
      for (let step = 0; step < 3000; step++) {
        const y = x.map((_, i) => x.reduce(([a, b], [xr, xi], j) => [a + S.re[i * n + j] * xr - S.im[i * n + j] * xi, b + S.re[i * n + j] * xi + S.im[i * n + j] * xr], [0, 0]))
        const z = x.map((_, i) => y.reduce(([a, b], [yr, yi], j) => [a + S.re[j * n + i] * yr + S.im[j * n + i] * yi, b + S.re[j * n + i] * yi - S.im[j * n + i] * yr], [0, 0]))
        const size = Math.sqrt(z.reduce((t, [a, b]) => t + a * a + b * b, 0))
        sigma = Math.sqrt(size)
        x = z.map(([a, b]) => [a / size, b / size])
      }
      expect(Math.abs(largestSingularValue(S) / sigma - 1)).toBeLessThanOrEqual(1e-7)
      expect(singularValueBound(S)).toBeGreaterThanOrEqual(sigma)
    }
  })
})

describe('closed forms', () => {
  it('of the delayed integrator are 2, 1 and 2·cos(2π/5)', () => {
    expect([0, 1, 2].map(integratorLimit)).toEqual([expect.closeTo(2, 14), expect.closeTo(1, 14), expect.closeTo(2 * Math.cos((2 * Math.PI) / 5), 14)])
  })

  it('of copper: 25 °C to 105 °C is 30.8 %', () => {
    expect(resistanceAt(16, 25)).toBeCloseTo(16, 12)
    expect(resistanceAt(1, 105)).toBeCloseTo(1.308, 3)
  })

  it('of the locked rotor scale with the supply and the delay', () => {
    const { plant } = base
    const a = windingPole(plant, 25, 1 / 15000)
    const one = lockedRotorLimit(plant, 25, 1 / 15000, 1, 1)
    expect(one).toBeCloseTo((16.5 * a) / (1 - a), 10)
    expect(lockedRotorLimit(plant, 25, 1 / 15000, 0, 1) / one).toBeCloseTo(2, 12)
    expect(lockedRotorLimit(plant, 25, 1 / 15000, 2, 1) / one).toBeCloseTo(0.618034, 6)
    expect(lockedRotorLimit(plant, 25, 1 / 15000, 1, 0.8) / one).toBeCloseTo(1.25, 12)
  })
})
