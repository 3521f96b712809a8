/** With every nonlinearity out of reach, the simulation is the plain linear product of tick maps. */
import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { zeroOrderHold } from '../../../server/control/discretise.ts'
import type { JointModel } from '../../../server/control/model.ts'
import { plantMatrices, supplyFactor } from '../../../server/control/plant.ts'
import { simulate } from '../../../server/control/simulation/simulate.ts'
import { aStep, compliantJoint, rigidJoint } from './joints.ts'

const MODES = ['position', 'velocity', 'current'] as const

/** θ at the current ticks from one linear map per tick and per outer task: z = [x, window, x_p, x_v, x_c, i_ref, requests, 1]. */
function linearRun({ plant, firmware: F, environment }: JointModel, p: number, q: number, ticks: number, reference: number): number[] {
  const { n, A, B, C_theta } = plantMatrices(plant, environment.T_winding)
  const gamma = supplyFactor(plant, F, environment)
  const at = { window: n, x_p: n + F.W, x_v: n + F.W + 1, x_c: n + F.W + 2, i_ref: n + F.W + 3, u: n + F.W + 4, one: n + F.W + 5 + F.D }
  const m = at.one + 1
  const identity = (): number[][] => Array.from({ length: m }, (_, r) => Array.from({ length: m }, (_, c) => (r === c ? 1 : 0)))
  const apply = (M: number[][], z: number[]): number[] => M.map((row) => row.reduce((sum, w, c) => sum + w * z[c], 0))
  const hold = (h: number): number[][] => {
    const { Ad, Bd } = zeroOrderHold(A, B, n, 1, h)
    const M = identity()
    for (let r = 0; r < n; r++) {
      for (let c = 0; c < n; c++) M[r][c] = Ad[r * n + c]
      M[r][at.u + F.D] = Bd[r] * gamma
    }
    return M
  }
  const theta = new Array<number>(m).fill(0)
  C_theta.forEach((w, c) => (theta[c] = w))
  const T_o = 1 / F.f_o
  const combine = (...terms: [number, number[]][]): number[] =>
    theta.map((_, c) => terms.reduce((sum, [w, row]) => sum + w * row[c], 0))
  const unit = (k: number): number[] => theta.map((_, c) => (c === k ? 1 : 0))
  const outer = identity()
  const speed = combine([F.f_o / F.W, theta], [-F.f_o / F.W, unit(at.window + F.W - 1)])
  const e_theta = combine([reference, unit(at.one)], [-1, theta])
  const position = F.mode === 'position'
  const newXp = combine([1, unit(at.x_p)], [position ? F.K_ip * T_o : 0, e_theta])
  const omega_ref = position ? combine([F.K_pp, e_theta], [1, newXp]) : combine([reference, unit(at.one)])
  const e_omega = combine([1, omega_ref], [-1, speed])
  const newXv = combine([1, unit(at.x_v)], [F.K_iv * T_o, e_omega])
  outer[at.x_p] = newXp
  outer[at.x_v] = newXv
  outer[at.i_ref] = F.mode === 'current' ? combine([reference, unit(at.one)]) : combine([F.K_pv, e_omega], [1, newXv])
  outer[at.window] = theta
  for (let k = 1; k < F.W; k++) outer[at.window + k] = unit(at.window + k - 1)
  const current = identity()
  const e_i = combine([1, unit(at.i_ref)], [-1, unit(0)])
  const newXc = combine([1, unit(at.x_c)], [F.K_ic / F.f_c, e_i])
  current[at.x_c] = newXc
  current[at.u] = combine([F.K_pc, e_i], [1, newXc])
  for (let k = 1; k <= F.D; k++) current[at.u + k] = unit(at.u + k - 1)

  const step = hold(1 / (F.f_c * q))
  let z = unit(at.one)
  const out: number[] = []
  for (let u = 0; u < ticks * q; u++) {
    if (u % q === 0) out.push(z[n - 1])
    if (u % p === 0) z = apply(outer, z)
    if (u % q === 0) z = apply(current, z)
    z = apply(step, z)
  }
  return out
}

describe('linear limit', () => {
  it('equals the product of tick maps on random joints', () => {
    const ratio = fc.constantFrom([15000, 4000, 15, 4], [16000, 4000, 4, 1], [12000, 8000, 3, 2], [9000, 9000, 1, 1])
    fc.assert(
      fc.property(
        fc.boolean(), ratio, fc.constantFrom(...MODES), fc.integer({ min: 0, max: 2 }), fc.integer({ min: 1, max: 20 }),
        fc.double({ min: 0.2, max: 1.2, noNaN: true }), fc.double({ min: 0.7, max: 1.2, noNaN: true }), fc.boolean(), fc.boolean(),
        (compliant, [f_c, f_o, p, q], mode, D, W, gain, supply, compensated, motorSide) => {
          const make = compliant ? compliantJoint : rigidJoint
          const base = make()
          const joint = make({
            plant: { tau_c: 0, encoder: motorSide ? 'motor' : 'output' },
            firmware: {
              mode, f_c, f_o, D, W, K_pc: base.firmware.K_pc * gain * 0.5, K_pv: base.firmware.K_pv * gain * 0.5,
              K_ip: 20 * gain, K_iv: base.firmware.K_iv * gain, supply_compensated: compensated,
            },
            V_bus: base.plant.V_nom * supply,
          })
          // So small a step that no limit is ever met, though the loop itself may be unstable.
          const reference = 1e-9
          const { traces, ticks } = simulate(joint, aStep({ step_to: reference, t_end: 0.01, trace_points: 1e6 }))
          const plain = linearRun(joint, p, q, ticks, reference)
          const scale = Math.max(...plain.map(Math.abs))
          expect(scale).toBeGreaterThan(0)
          for (let k = 0; k < ticks; k++) expect(Math.abs(traces.theta[k] - plain[k])).toBeLessThan(1e-9 * scale)
        },
      ),
      { seed: 20250311, numRuns: 40 },
    )
  })
})
