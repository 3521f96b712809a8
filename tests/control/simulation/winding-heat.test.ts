import { describe, expect, it } from 'vitest'
import { NumericError } from '../../../server/control/errors.ts'
import {
  ALPHA_25, assessPeak, continuousCurrent, steadyTemperature, temperatureAfter, timeToTemperature,
} from '../../../server/control/simulation/winding-heat.ts'
import type { TwoNode } from '../../../server/control/simulation/winding-heat.ts'

const ONE = { R: 6, R_th: 37, tau_th: 300, T_amb: 25 }
const TWO: TwoNode = { R: 6, R_wh: 12, R_ha: 25, tau_w: 8, tau_h: 300, T_amb: 25 }

/** Classical Runge–Kutta on the two-node equations; returns winding and housing after t. */
function runTwo(node: TwoNode, I: number, t: number, steps: number): [number, number] {
  const [C_w, C_h] = [node.tau_w / node.R_wh, node.tau_h / node.R_ha]
  const rate = ([w, h]: number[]): number[] => {
    const loss = I * I * node.R * (1 + ALPHA_25 * (w - 25))
    const flow = (w - h) / node.R_wh
    return [(loss - flow) / C_w, (flow - (h - node.T_amb) / node.R_ha) / C_h]
  }
  let x = [node.T_amb, node.T_amb]
  const d = t / steps
  const add = (k: number[], f: number): number[] => x.map((value, j) => value + f * k[j])
  for (let s = 0; s < steps; s++) {
    const k1 = rate(x)
    const k2 = rate(add(k1, d / 2))
    const k3 = rate(add(k2, d / 2))
    const k4 = rate(add(k3, d))
    x = x.map((value, j) => value + (d / 6) * (k1[j] + 2 * k2[j] + 2 * k3[j] + k4[j]))
  }
  return [x[0], x[1]]
}

describe('winding heat', () => {
  it('raises copper from 25 °C to 105 °C by 30.8 % (control-model.md §7)', () => {
    expect(80 * ALPHA_25).toBeCloseTo(0.308, 3)
  })

  it('follows the cold curve t = τ·ln(I²/(I² − (k·I_B)²)) where the loss hardly grows (IEC 60255-149, from memory)', () => {
    // A limit of 0.01 K above ambient keeps copper's own rise below 4e-5 of the loss.
    const node = { ...ONE, T_amb: 25 }
    const I = 0.02
    const limit = 25 + 0.01
    const I_B = Math.sqrt(0.01 / (node.R * node.R_th))
    const time = timeToTemperature(node, I, limit)
    const expected = node.tau_th * Math.log(I ** 2 / (I ** 2 - I_B ** 2))
    expect(time.kind === 'time' && Math.abs(time.seconds / expected - 1) < 1e-3).toBe(true)
  })

  it('agrees with a Runge–Kutta run of the two-node equations', () => {
    for (const [I, t] of [[2, 3], [0.5, 200], [1.1, 60]]) {
      const got = temperatureAfter(TWO, I, t)
      const [winding, housing] = runTwo(TWO, I, t, 4000)
      expect(Math.abs(got.winding - winding)).toBeLessThan(1e-8 * winding)
      expect(Math.abs(got.housing - housing)).toBeLessThan(1e-8 * housing)
    }
  })

  it('finds the time at which that run meets the limit, far below what one node allows', () => {
    const two = timeToTemperature(TWO, 2, 125)
    const one = timeToTemperature(ONE, 2, 125)
    if (two.kind !== 'time' || one.kind !== 'time') throw new Error('both reach the limit')
    expect(runTwo(TWO, 2, two.seconds, 4000)[0]).toBeCloseTo(125, 7)
    expect(two.seconds).toBeLessThan(one.seconds / 5)
  })

  it('settles where loss and cooling balance, and takes no time there when it starts there', () => {
    for (const node of [ONE, TWO]) {
      const steady = steadyTemperature(node, 0.4)
      if (steady.kind !== 'steady') throw new Error('settles')
      expect(temperatureAfter(node, 0.4, 1e5).winding).toBeCloseTo(steady.celsius, 9)
      expect(timeToTemperature(node, 0.4, steady.celsius + 1)).toEqual({ kind: 'never', steadyCelsius: steady.celsius })
      expect(continuousCurrent(node, steady.celsius)).toBeCloseTo(0.4, 12)
    }
    expect(timeToTemperature(ONE, 0.4, 25)).toEqual({ kind: 'already there' })
    expect(continuousCurrent(ONE, 20)).toBe(0)
  })

  it('says that there is no steady temperature from α₂₅·I²·R·R_th = 1 on, and still gives the time', () => {
    const edge = Math.sqrt(1 / (ALPHA_25 * ONE.R * ONE.R_th))
    expect(steadyTemperature(ONE, edge * 1.0000001).kind).toBe('no steady temperature')
    expect(steadyTemperature(ONE, edge * 0.9999999).kind).toBe('steady')
    // At the edge the rise is a straight line: t = ΔT·C/P.
    const time = timeToTemperature(ONE, edge, 125)
    const expected = (100 * ONE.tau_th) / ONE.R_th / (edge ** 2 * ONE.R)
    expect(time.kind === 'time' && Math.abs(time.seconds / expected - 1) < 1e-9).toBe(true)
  })

  it('reports the time at peak as not assessed for one node', () => {
    const one = assessPeak(ONE, 2, 125)
    expect(one).toMatchObject({ kind: 'not assessed', reason: 'winding time constant missing' })
    expect(one.time).toEqual(timeToTemperature(ONE, 2, 125))
    expect(assessPeak(TWO, 2, 125)).toEqual({ kind: 'assessed', time: timeToTemperature(TWO, 2, 125) })
  })

  it.each([[{ ...ONE, R: NaN }], [{ ...ONE, R_th: 0 }], [{ ...TWO, tau_h: -1 }], [{ ...ONE, T_amb: Infinity }]])('refuses %j', (node) => {
    expect(() => timeToTemperature(node, 1, 100)).toThrow(NumericError)
    expect(() => steadyTemperature(node, 1)).toThrow(NumericError)
  })
})
