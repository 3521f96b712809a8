import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { analyse } from '../../server/control/analyse.ts'
import { NumericError } from '../../server/control/errors.ts'
import type { JointModel } from '../../server/control/model.ts'
import { evaluatePoint } from '../../server/control/point.ts'
import { simulate } from '../../server/control/simulation/simulate.ts'
import { verdict } from '../../server/control/verdict.ts'
import { MOTORS, plausibleJoint } from './random-joints.ts'

const values = ['R', 'L', 'k_t', 'k_e', 'N', 'eta', 'J_rotor', 'J_load', 'b_load', 'b_rotor', 'R_on', 'V_nom', 'tau_c', 'i_lsb'] as const
const gains = ['K_pp', 'K_ip', 'K_pv', 'K_iv', 'K_pc', 'K_ic', 'omega_max', 'I_max'] as const

/** The first number in an answer that is none; null where all are finite. */
function notFinite(answer: unknown, path = ''): string | null {
  if (typeof answer === 'number') return Number.isFinite(answer) ? null : `${path} = ${answer}`
  if (ArrayBuffer.isView(answer)) {
    const at = Array.from(answer as Float64Array).findIndex((v) => !Number.isFinite(v))
    return at < 0 ? null : `${path}[${at}]`
  }
  if (typeof answer !== 'object' || answer === null) return null
  for (const [key, value] of Object.entries(answer)) {
    const found = notFinite(value, `${path}.${key}`)
    if (found) return found
  }
  return null
}

/** Values as a careless hand types them: wrong by powers of ten, or no value of a joint at all. */
const odd = fc.oneof(fc.double({ min: -15, max: 15, noNaN: true }).map((e) => ({ factor: 10 ** e })), fc.constantFrom(1e-300, 1e300, 5e-324, 1.7e308, 0, -1, 1e29, 1e-29).map((value) => ({ value })))
const edits = fc.array(fc.tuple(fc.constantFrom(...values, ...gains), odd), { minLength: 1, maxLength: 3 })

function edited(model: JointModel, list: [string, { factor: number } | { value: number }][]): JointModel {
  const plant = { ...model.plant } as Record<string, unknown>
  const firmware = { ...model.firmware } as Record<string, unknown>
  for (const [name, by] of list) {
    const group = name in plant ? plant : firmware
    group[name] = 'value' in by ? by.value : (group[name] as number) * by.factor
  }
  return { plant, firmware, environment: model.environment } as unknown as JointModel
}

describe('values that are no joint’s', () => {
  it('are refused by name, or computed to numbers throughout', () => {
    const works: [string, (m: JointModel) => unknown][] = [
      ['analyse', analyse],
      ['verdict', verdict],
      ['point', (m) => evaluatePoint(m, true)],
      ['simulate', (m) => simulate(m, { profile: 'step', step_to: 0.2, theta_0: 0, t_end: 0.005, encoder_quantised: true, current_quantised: true, tau_load: 0, backlash: 0 })],
    ]
    const ended = { refused: 0, computed: 0 }
    fc.assert(
      fc.property(plausibleJoint, edits, (joint, list) => {
        const model = edited(joint, list)
        for (const [name, work] of works) {
          try {
            expect(notFinite(work(model)), name).toBeNull()
            ended.computed++
          } catch (error) {
            if (!(error instanceof NumericError)) throw error
            expect(error.message.length).toBeGreaterThan(20)
            ended.refused++
          }
        }
      }),
      { seed: 1601, numRuns: 120 },
    )
    expect(ended.refused).toBeGreaterThan(50)
    expect(ended.computed).toBeGreaterThan(50)
  }, 60_000)

  it.each([
    ['plant.L', { L: 5e-324 }, {}],
    ['plant.i_lsb', { i_lsb: 1e-300 }, {}],
    ['firmware.K_ic', {}, { K_ic: 1e100 }],
    ['firmware.K_pv', {}, { K_pv: Number.NaN }],
    ['plant.R', { R: -1 }, {}],
    ['plant.J_load', { J_load: 0, J_rotor: 0 }, {}],
    ['firmware.W', {}, { W: 257 }],
    ['p + q exceeds 512', {}, { f_o: 3999.9 }],
  ])('says %s', (field, plant, firmware) => {
    const [motor] = MOTORS
    expect(() => verdict({ plant: { ...motor.plant, ...plant }, firmware: { ...motor.firmware, ...firmware }, environment: { V_bus: 12, T_winding: 25 } })).toThrow(field)
  })

  it('leave a limit that nobody gave as large as a number gets', () => {
    const [motor] = MOTORS
    expect(verdict({ plant: motor.plant, firmware: { ...motor.firmware, omega_max: Number.MAX_VALUE, I_max: Number.MAX_VALUE }, environment: { V_bus: 12, T_winding: 25 } }).verdict).toBe('stable')
  })
})
