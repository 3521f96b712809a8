/** Tuning rules with published figures; each entry of tuning.json carries its source. */
import { describe, expect, it } from 'vitest'
import { stepMetrics } from '../../../../server/control/simulation/metrics.ts'
import { modulusOptimum, reactionCurve, simc, symmetricOptimum, ultimateGain } from '../../../../server/control/tuning/rules.ts'
import { stepOfTransferFunction } from '../../simulation/sampled-step.ts'
import entries from './tuning.json'

interface Entry {
  id: string
  source: string
  expected: { [name: string]: number | number[] }
  tolerance: { abs: number }
  recomputed: { [name: string]: number | number[] }
}

const all = entries as unknown as Entry[]

function entry(id: string): Entry {
  const found = all.find((e) => e.id === id)
  if (found === undefined) throw new Error(`no entry ${id}`)
  return found
}

/** Expected figures within the published tolerance, recomputed ones within `fine`. */
function agrees(e: Entry, got: { [name: string]: number | number[] }, fine: number): void {
  for (const [name, value] of Object.entries(e.expected)) {
    expect(got, e.source).toHaveProperty(name)
    const mine = [got[name]].flat()
    ;[value].flat().forEach((v, k) => expect(Math.abs(mine[k] - v), `${e.id} ${name} ${mine[k]} for ${v} (${e.source})`).toBeLessThanOrEqual(e.tolerance.abs))
  }
  for (const name of Object.keys(got)) {
    if (e.recomputed[name] === undefined) continue
    const mine = [got[name]].flat()
    ;[e.recomputed[name]].flat().forEach((v, k) => expect(Math.abs(mine[k] - v), `${e.id} ${name} recomputed`).toBeLessThanOrEqual(fine * Math.max(1, Math.abs(v))))
  }
}

type Complex = [number, number]
type Loop = (omega: number) => Complex

const mul = ([a, b]: Complex, [c, d]: Complex): Complex => [a * c - b * d, a * d + b * c]
const div = (x: Complex, [c, d]: Complex): Complex => mul(x, [c / (c * c + d * d), -d / (c * c + d * d)])
const poly = (c: number[], omega: number): Complex => c.reduce<Complex>((sum, value) => mul(sum, [0, omega]).map((x, k) => x + (k === 0 ? value : 0)) as Complex, [0, 0])

/** num(s)/den(s)·e^(−delay·s) on the imaginary axis. */
function loopOf(num: number[], den: number[], delay = 0): Loop {
  return (omega) => mul(div(poly(num, omega), poly(den, omega)), [Math.cos(delay * omega), -Math.sin(delay * omega)])
}

/** Margins by a dense logarithmic walk with bisection at each crossing; loops with one crossing of either kind. */
function marginsOf(L: Loop, low: number, high: number): { GM: number; PM: number; w_gc: number; Ms: number; Mt: number; DM: number } {
  const magnitude = (w: number): number => Math.hypot(...L(w)) - 1
  const imaginary = (w: number): number => L(w)[1]
  const root = (f: (w: number) => number, a: number, b: number): number => {
    for (let k = 0; k < 100; k++) {
      const m = Math.sqrt(a * b)
      if (f(m) > 0 === f(a) > 0) a = m
      else b = m
    }
    return a
  }
  const n = 200_000
  let [GM, w_gc, Ms, Mt] = [Infinity, NaN, 0, 0]
  let before = low
  for (let k = 0; k <= n; k++) {
    const w = low * (high / low) ** (k / n)
    const value = L(w)
    const one = Math.hypot(1 + value[0], value[1])
    Ms = Math.max(Ms, 1 / one)
    Mt = Math.max(Mt, Math.hypot(...value) / one)
    if (k > 0) {
      if (Number.isNaN(w_gc) && magnitude(before) > 0 && magnitude(w) <= 0) w_gc = root(magnitude, before, w)
      if (value[0] < 0 && imaginary(before) > 0 !== imaginary(w) > 0) GM = Math.min(GM, 1 / Math.abs(L(root(imaginary, before, w))[0]))
    }
    before = w
  }
  const [re, im] = L(w_gc)
  const PM = ((Math.atan2(-im, -re) * 180) / Math.PI + 360) % 360
  return { GM, PM, w_gc, Ms, Mt, DM: (PM * Math.PI) / 180 / w_gc }
}

describe('published tuning rules', () => {
  it('leaves no entry out', () => {
    expect(all.map((e) => e.id).sort()).toEqual(
      ['tune.mo', 'tune.simc.first', 'tune.simc.integ', 'tune.so.a2.414', 'tune.so.a3', 'tune.zn.eglm03', 'tune.zn.step.eglm03', 'tune.zn.table'].sort(),
    )
    expect(all.every((e) => e.source.length > 10)).toBe(true)
  })

  it('modulus optimum', () => {
    // Plant 3/(1 + 20 s) with small lags of 1 s in all: the rule must leave 1/(2s(1 + s)).
    const { K_p, K_i } = modulusOptimum({ gain: 3, large: 20, T_sigma: 1 })
    const [num, den] = [[3 * K_p, 3 * K_i], [20, 21, 1, 0]]
    const L = loopOf(num, den)
    const m = marginsOf(L, 1e-3, 1e2)
    const y = stepOfTransferFunction(num, [20, 21, 1 + 3 * K_p, 3 * K_i], 1e-3, 40_001)
    const s = stepMetrics({ response: y, dt: 1e-3, from: 0, to: 1 })
    agrees(entry('tune.mo'), { overshoot_pct: 100 * s.overshoot, PM: m.PM, Ms: m.Ms, w_gc: m.w_gc, zeta: dampingOfOvershoot(s.overshoot) }, 1e-5)
  })

  it.each([['tune.so.a2.414', 1 + Math.SQRT2], ['tune.so.a3', 3]])('symmetric optimum %s', (id, a) => {
    const slope = 4
    const { K_p, K_i } = symmetricOptimum({ slope, T_sigma: 1 }, a)
    const [num, den] = [[slope * K_p, slope * K_i], [1, 1, 0, 0]]
    const m = marginsOf(loopOf(num, den), 1e-3, 1e2)
    const closed = [1, 1, slope * K_p, slope * K_i]
    const plain = stepMetrics({ response: stepOfTransferFunction(num, closed, 1e-3, 80_001), dt: 1e-3, from: 0, to: 1 })
    // The prefilter 1/(1 + T_i·s) takes the controller's zero out.
    const filtered = stepMetrics({ response: stepOfTransferFunction([slope * K_i], closed, 1e-3, 80_001), dt: 1e-3, from: 0, to: 1 })
    agrees(entry(id), { PM: m.PM, w_gc: m.w_gc, Ms: m.Ms, overshoot_pct: 100 * plain.overshoot, prefilter_overshoot_pct: 100 * filtered.overshoot }, 1e-5)
  })

  it('SIMC, first order with delay', () => {
    const [gain, large, delay] = [2, 5, 1]
    const { K_p, K_i } = simc({ gain, large, delay })
    const m = marginsOf(loopOf([gain * K_p, gain * K_i], [large, 1, 0], delay), 1e-3, 1e1)
    agrees(entry('tune.simc.first'), { GM: m.GM, PM: m.PM, Ms: m.Ms, Mt: m.Mt, DM_over_theta: m.DM / delay }, 1e-5)
  })

  it('SIMC, integrator with delay', () => {
    const [slope, delay] = [0.7, 2]
    const { K_p, K_i } = simc({ slope, delay })
    const m = marginsOf(loopOf([slope * K_p, slope * K_i], [1, 0, 0], delay), 1e-3, 1e1)
    agrees(entry('tune.simc.integ'), { GM: m.GM, PM: m.PM, Ms: m.Ms, Mt: m.Mt, DM_over_theta: m.DM / delay }, 1e-5)
  })

  it('ultimate gain and period, three-term form', () => {
    // 6/((s+1)(s+2)(s+3)): −180° at √11, where |(j√11+1)(j√11+2)(j√11+3)| = 60.
    const [K_u, T_u] = [60 / 6, (2 * Math.PI) / Math.sqrt(11)]
    const { K_p, T_i, T_d } = ultimateGain(K_u, T_u, 'PID')
    agrees(entry('tune.zn.eglm03'), { Ku: K_u, Tu: T_u, num: [K_p * T_i * T_d, K_p * T_i, K_p], den0: T_i }, 1e-9)
  })

  it('reaction curve, three-term form', () => {
    const [L, R] = [0.42, 1 / (2.674 - 0.42)]
    // The page rounds R·L so that K_p = 6.44: its own arithmetic, so its tolerance is on the rounded figures.
    const { K_p, T_i, T_d } = reactionCurve(R, L, 'PID')
    agrees(entry('tune.zn.step.eglm03'), { R, num: [K_p * T_i * T_d, K_p * T_i, K_p], den0: T_i }, 1e-3)
  })

  it('two-term forms with the original gains', () => {
    const frequency = ultimateGain(1, 1, 'PI')
    const step = reactionCurve(1, 1, 'PI')
    agrees(entry('tune.zn.table'), { freq_ki: frequency.K_p / frequency.T_i, step_ki: step.K_p / step.T_i }, 1e-12)
  })
})

function dampingOfOvershoot(overshoot: number): number {
  const l = -Math.log(overshoot)
  return l / Math.hypot(Math.PI, l)
}
