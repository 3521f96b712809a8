import { describe, expect, it } from 'vitest'
import { analyse } from '../../server/control/analyse.ts'
import { NumericError } from '../../server/control/errors.ts'
import { DELAY_LIMIT, validateJointModel, W_LIMIT, type JointModel } from '../../server/control/model.ts'
import { MOTORS } from './random-joints.ts'

const base: JointModel = { plant: MOTORS[1].plant, firmware: MOTORS[1].firmware, environment: { V_bus: 24, T_winding: 25 } }

type Part = 'plant' | 'firmware' | 'environment'
const changed = (part: Part, field: string, value: unknown): JointModel => ({ ...base, [part]: { ...base[part], [field]: value } }) as JointModel

function refusal(model: JointModel): NumericError {
  try {
    validateJointModel(model)
  } catch (error) {
    if (error instanceof NumericError) return error
  }
  throw new Error('the joint was accepted')
}

const NUMBERS: [Part, string[]][] = [
  ['plant', ['V_nom', 'R', 'R_on', 'L', 'k_t', 'k_e', 'N', 'eta', 'J_rotor', 'J_load', 'b_rotor', 'b_load', 'k_s', 'd_s', 'tau_c', 'i_lsb', 'bits']],
  ['firmware', ['f_c', 'f_o', 'W', 'D', 'sensor_delay', 'outer_delay', 'K_pp', 'K_ip', 'K_pv', 'K_iv', 'K_pc', 'K_ic', 'omega_max', 'I_max', 'd_max']],
  ['environment', ['V_bus', 'T_winding']],
]

describe('a joint is guarded before any arithmetic', () => {
  it('accepts the joint that the refusals start from', () => {
    expect(() => validateJointModel(base)).not.toThrow()
  })

  for (const [part, fields] of NUMBERS) {
    it.each(fields)(`${part}.%s must be a finite number`, (field) => {
      for (const value of [NaN, Infinity, -Infinity, '1', undefined]) {
        if (value === undefined && (field === 'sensor_delay' || field === 'outer_delay')) continue
        const error = refusal(changed(part, field, value))
        expect(error.code).toBe('not-finite')
        expect(error.details.field).toBe(`${part}.${field}`)
      }
    })
  }

  const POSITIVE = ['V_nom', 'R', 'L', 'k_t', 'N', 'eta', 'k_s', 'J_rotor', 'J_load']
  it.each(POSITIVE)('plant.%s must be above 0', (field) => {
    for (const value of [0, -1]) expect(refusal(changed('plant', field, value))).toMatchObject({ code: 'out-of-range', details: { field: `plant.${field}` } })
  })
  it.each(['R_on', 'k_e', 'b_rotor', 'b_load', 'd_s', 'tau_c', 'i_lsb'])('plant.%s may be 0, not less', (field) => {
    expect(() => validateJointModel(changed('plant', field, 0))).not.toThrow()
    expect(refusal(changed('plant', field, -1e-9))).toMatchObject({ code: 'out-of-range', details: { field: `plant.${field}` } })
  })

  it.each<[Part, string, unknown]>([
    ['firmware', 'W', 0], ['firmware', 'W', 1.5], ['firmware', 'W', W_LIMIT + 1], ['firmware', 'D', 3], ['firmware', 'D', -1], ['firmware', 'sensor_delay', DELAY_LIMIT + 1],
    ['firmware', 'outer_delay', 0.5], ['firmware', 'd_max', 1.01], ['firmware', 'omega_max', 0], ['firmware', 'I_max', -1], ['firmware', 'mode', 'torque'], ['firmware', 'supply_compensated', 1],
    ['plant', 'bits', 0], ['plant', 'bits', 33], ['plant', 'encoder', 'both'], ['plant', 'tau_s', 0.01], ['environment', 'V_bus', 0], ['environment', 'T_winding', -300], ['environment', 'T_winding', 5000],
  ])('%s.%s = %s is refused by name', (part, field, value) => {
    expect(refusal(changed(part, field, value))).toMatchObject({ code: 'out-of-range', details: { field: `${part}.${field}` } })
  })

  it('refuses half a compliance and a missing part', () => {
    expect(refusal(changed('plant', 'd_s', null)).details.field).toBe('plant.d_s')
    expect(refusal(changed('plant', 'k_s', null)).details.field).toBe('plant.k_s')
    expect(refusal({ plant: base.plant, firmware: base.firmware } as JointModel).code).toBe('bad-input')
  })

  it('says what happened, what was kept and what to do', () => {
    expect(refusal(changed('plant', 'R', -2)).message).toMatch(/plant\.R is -2.*above 0.*Nothing was computed.*Correct/)
  })

  it('gives no NaN to a joint at the edge of the range', () => {
    const edge: JointModel = { ...base, plant: { ...base.plant, R: 1e-6, L: 1e-9, b_load: 0, b_rotor: 0, d_s: 0 }, firmware: { ...base.firmware, W: W_LIMIT, D: 2 } }
    const report = analyse(edge)
    expect(Number.isFinite(report.rho)).toBe(true)
    expect(report.verdict).toMatch(/stable|unstable|boundary/)
  })
})
