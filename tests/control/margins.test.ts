import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { analyse } from '../../server/control/analyse.ts'
import { frequencyResponse } from '../../server/control/frequency-response.ts'
import type { ControlMode, JointModel } from '../../server/control/model.ts'
import { verdict } from '../../server/control/verdict.ts'
import { firstReaching, perturbedRadius } from './perturbation.ts'
import { MOTORS, plausibleJoint } from './random-joints.ts'

/** 60 dB in steps of a quarter dB, 180° in steps of one: what a scan of Φ resolves. */
const GAIN_STEPS = 240
const PHASE_STEPS = 180

const agree = (a: number | null, b: number | null, tol: number): boolean => (a === null || b === null ? a === b : Math.abs(a / b - 1) <= tol)

describe('margins by two routes', () => {
  it('loci of the lifted loop and perturbation of Φ agree over random joints', () => {
    const compared: Record<string, number> = {}
    fc.assert(
      fc.property(plausibleJoint, (model) => {
        const report = analyse(model)
        for (const [closure, loop] of Object.entries(report.loops) as [ControlMode, NonNullable<(typeof report.loops)['current']>][]) {
          if (loop.verdict !== 'stable') {
            expect(loop.gainUp.kind).toBe('unstable')
            continue
          }
          const radius = perturbedRadius(model, closure)
          const up = loop.gainUp.kind === 'margin' ? loop.gainUp.factor : null
          const down = loop.gainDown.kind === 'margin' ? loop.gainDown.factor : null
          const phase = loop.phase.kind === 'margin' ? (loop.phase.phaseMarginDeg * Math.PI) / 180 : null
          expect(agree(up, firstReaching((g) => radius(g, 0), 1, 1000, GAIN_STEPS, true), 1e-6), `${closure} gain up`).toBe(true)
          expect(agree(down, firstReaching((g) => radius(g, 0), 1, 1e-3, GAIN_STEPS, true), 1e-6), `${closure} gain down`).toBe(true)
          expect(agree(phase, firstReaching((x) => radius(1, x), 0, Math.PI, PHASE_STEPS, false), 1e-5), `${closure} phase`).toBe(true)
          compared[closure] = (compared[closure] ?? 0) + 1
        }
      }),
      { seed: 2024, numRuns: 60 },
    )
    expect(Object.keys(compared).sort()).toEqual(['current', 'position', 'velocity'])
  })

  it('M_s is the peak of a fine scan of 1/|1 + L| where one rate alone appears', () => {
    fc.assert(
      fc.property(plausibleJoint, (model) => {
        const single: JointModel = { ...model, firmware: { ...model.firmware, f_c: 16000, f_o: 4000 } }
        const report = analyse(single)
        for (const [closure, loop] of Object.entries(report.loops) as [ControlMode, NonNullable<(typeof report.loops)['current']>][]) {
          if (loop.M_s.kind !== 'peak') continue
          const rate = closure === 'current' ? 16000 : 4000
          const hz = Array.from({ length: 4000 }, (_, k) => 1e-3 * (rate / 2 / 1e-3) ** (k / 3999))
          const { L_re, L_im } = frequencyResponse(single, closure, hz)
          const scanned = Math.max(...L_re.map((re, k) => 1 / Math.hypot(1 + re, L_im[k])))
          expect(loop.M_s.value).toBeGreaterThanOrEqual(scanned * (1 - 1e-9))
          // A scan of 0.4 % steps misses a sharp peak's top.
          expect(loop.M_s.value).toBeLessThanOrEqual(scanned * (1 + 0.02 * loop.M_s.value))
          // For one rate the bounds of the trade hold: a gain and a phase margin follow from M_s.
          if (loop.gainUp.kind === 'margin') expect(loop.gainUp.factor).toBeGreaterThanOrEqual((loop.M_s.value / (loop.M_s.value - 1)) * (1 - 1e-6))
          if (loop.phase.kind === 'margin') expect(loop.phase.phaseMarginDeg).toBeGreaterThanOrEqual(((2 * Math.asin(1 / (2 * loop.M_s.value))) / Math.PI) * 180 * (1 - 1e-6))
        }
      }),
      { seed: 9, numRuns: 30 },
    )
  })

  it('the delay margin is where whole ticks of added delay make the velocity loop unstable', () => {
    let compared = 0
    fc.assert(
      fc.property(plausibleJoint, (model) => {
        const single: JointModel = { ...model, firmware: { ...model.firmware, mode: 'velocity', f_c: 4000, f_o: 4000, outer_delay: 0 } }
        const loop = analyse(single).loops.velocity
        if (loop?.delay.kind !== 'margin' || loop.delay.ticks > 30) return
        const whole = Math.floor(loop.delay.ticks)
        // A margin within 1 % of a whole tick proves nothing either way.
        if (Math.abs(loop.delay.ticks - Math.round(loop.delay.ticks)) < 0.01) return
        const delayed = (ticks: number): string => verdict({ ...single, firmware: { ...single.firmware, outer_delay: ticks } }).verdict
        for (let k = 0; k <= whole; k++) expect(delayed(k)).toBe('stable')
        if (delayed(whole + 1) === 'unstable') compared++
      }),
      { seed: 14, numRuns: 400 },
    )
    // Past the first crossing a loop may come back before the next whole tick; it seldom does.
    expect(compared).toBeGreaterThan(15)
  })
})

describe('margins at the edges', () => {
  const { plant, firmware } = MOTORS[0]
  const environment = { V_bus: 12, T_winding: 25 }

  it('long patterns of ticks are worked off too: 33/32', () => {
    const model: JointModel = { plant, environment, firmware: { ...firmware, mode: 'velocity', f_c: 13200, f_o: 12800, W: 8, K_pv: 0.1, K_iv: 4, K_ic: 60000, K_pc: 4 } }
    const report = analyse(model)
    expect([report.p, report.q]).toEqual([33, 32])
    const loop = report.loops.velocity
    expect(loop?.verdict).toBe('stable')
    if (loop?.gainUp.kind !== 'margin' || loop.phase.kind !== 'margin') throw new Error('the loop has both margins')
    const radius = perturbedRadius(model, 'velocity')
    expect(radius(loop.gainUp.factor * (1 - 1e-5), 0)).toBeLessThan(1)
    expect(radius(loop.gainUp.factor * (1 + 1e-5), 0)).toBeGreaterThan(1)
    const phi = (loop.phase.phaseMarginDeg * Math.PI) / 180
    expect(radius(1, phi * (1 - 1e-5))).toBeLessThan(1)
    expect(radius(1, phi * (1 + 1e-5))).toBeGreaterThan(1)
  }, 120_000)

  it('an unstable loop has no number, and the loops around it are judged by themselves', () => {
    const report = analyse({ plant, environment, firmware: { ...firmware, K_pc: 100 } })
    expect(report.loops.current?.verdict).toBe('unstable')
    expect(report.loops.current).toMatchObject({ gainUp: { kind: 'unstable' }, phase: { kind: 'unstable' }, delay: { kind: 'unstable' }, M_s: { kind: 'unstable' }, bandwidths: null })
  })

  it('a loop without gain crosses nothing', () => {
    const report = analyse({ plant, environment, firmware: { ...firmware, mode: 'current', K_pc: 1e-9, K_ic: 0 } })
    expect(report.loops.current).toMatchObject({ gainUp: { kind: 'none-within', limitDb: 60 }, gainDown: { kind: 'none-within', limitDb: -60 }, phase: { kind: 'none-up-to' }, delay: { kind: 'none' } })
  })
})
