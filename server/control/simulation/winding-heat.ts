/** Winding heat: how warm a motor's winding gets, and how long a current may last. control-model.md §6. */
import { guardNumber } from '../model.ts'
import { ALPHA_20 } from '../plant.ts'

/** Relative rise of copper's resistance per kelvin, referred to its value at 25 °C (0.00393/K at 20 °C, IEC 60028). */
export const ALPHA_25 = ALPHA_20 / (1 + 5 * ALPHA_20)

/** One thermal node: winding and housing as one body. Ω, K/W, s, °C. */
export interface OneNode {
  R: number
  R_th: number
  tau_th: number
  T_amb: number
}

/** Two nodes: winding to housing and housing to ambient, each with its own time constant τ = R·C. Ω, K/W, s, °C. */
export interface TwoNode {
  R: number
  R_wh: number
  R_ha: number
  tau_w: number
  tau_h: number
  T_amb: number
}

/** `gain` is α₂₅·I²·R·R_th: at 1 and above copper's rise outruns the cooling. */
export type SteadyTemperature =
  | { kind: 'steady'; celsius: number; gain: number }
  | { kind: 'no steady temperature'; gain: number }

export type TimeToTemperature =
  | { kind: 'time'; seconds: number }
  /** The winding never gets there: it settles at `steadyCelsius`. */
  | { kind: 'never'; steadyCelsius: number }
  | { kind: 'already there' }

/**
 * Steady winding temperature at a constant current, for either thermal model (the total resistance decides).
 *
 * @param node  R at 25 °C (Ω), thermal resistances (K/W), ambient (°C)
 * @param I     current, A
 * @returns     °C, or that there is none
 * @throws      NumericError not-finite, out-of-range (names the value)
 * @accuracy    closed form; 1e-9 K against the vectors' thermal entries (winding-heat.test.ts)
 * @source      control-model.md §6
 */
export function steadyTemperature(node: OneNode | TwoNode, I: number): SteadyTemperature {
  checkNode(node)
  checkFinite('I', I)
  const R_th = 'R_th' in node ? node.R_th : node.R_wh + node.R_ha
  const gain = ALPHA_25 * I * I * node.R * R_th
  if (gain >= 1) return { kind: 'no steady temperature', gain }
  return { kind: 'steady', gain, celsius: node.T_amb + (lossAtAmbient(node, I) * R_th) / (1 - gain) }
}

/** Winding loss with everything at ambient, W. */
function lossAtAmbient(node: OneNode | TwoNode, I: number): number {
  return I * I * node.R * (1 + ALPHA_25 * (node.T_amb - 25))
}

/** The two-node equations about ambient, x = [winding, housing] − T_amb: dx/dt = A·x + [p, 0], as two modes. */
interface HeatModes {
  rates: readonly number[]
  /** The winding's and the housing's share of each mode: rise = Σ share·∫₀ᵗ e^{rate·s} ds. */
  winding: readonly number[]
  housing: readonly number[]
}

function heatModes(node: OneNode | TwoNode, I: number): HeatModes {
  const p = lossAtAmbient(node, I)
  const copper = ALPHA_25 * I * I * node.R
  if ('R_th' in node) {
    const C = node.tau_th / node.R_th
    return { rates: [(copper - 1 / node.R_th) / C], winding: [p / C], housing: [p / C] }
  }
  const C_w = node.tau_w / node.R_wh
  const C_h = node.tau_h / node.R_ha
  const g = 1 / node.R_wh
  const a = (copper - g) / C_w
  const b = g / C_w
  const c = g / C_h
  const d = -(g + 1 / node.R_ha) / C_h
  // b·c > 0, so the eigenvalues are real and distinct. The one nearer to 0 comes from the product: no cancellation.
  const mean = (a + d) / 2
  const radius = Math.hypot((a - d) / 2, Math.sqrt(b * c))
  const far = mean < 0 ? mean - radius : mean + radius
  const near = (a * d - b * c) / far
  const share = p / C_w / (far - near)
  return {
    rates: [far, near],
    winding: [share * (far - d), share * (d - near)],
    housing: [share * c, -share * c],
  }
}

/** ∫₀ᵗ e^{rate·s} ds. */
function growth(rate: number, t: number): number {
  const x = rate * t
  return Math.abs(x) < 1e-8 ? t * (1 + x / 2) : Math.expm1(x) / rate
}

/** Winding and housing temperature (°C) after `t` seconds of current `I`, from ambient. One node: both the same. */
export function temperatureAfter(node: OneNode | TwoNode, I: number, t: number): { winding: number; housing: number } {
  checkNode(node)
  checkFinite('I', I)
  checkFinite('t', t)
  const modes = heatModes(node, I)
  return { winding: node.T_amb + rise(modes.rates, modes.winding, t), housing: node.T_amb + rise(modes.rates, modes.housing, t) }
}

function rise(rates: readonly number[], shares: readonly number[], t: number): number {
  let sum = 0
  for (let k = 0; k < rates.length; k++) sum += shares[k] * growth(rates[k], t)
  return sum
}

/**
 * How long a constant current may last from ambient until the winding reaches `T_max`.
 *
 * The rise from ambient is monotone, so bisection on the closed-form response finds the one crossing.
 *
 * @param node   thermal model; ambient in °C
 * @param I      current, A
 * @param T_max  winding limit, °C
 * @returns      s, "never", or "already there" when ambient is at the limit
 * @throws       NumericError not-finite, out-of-range (names the value)
 * @accuracy     1e-12 of the time (winding-heat.test.ts: closed form of one node, fine Runge–Kutta run of two)
 * @source       control-model.md §6; IEC 60255-149 cold curve for the loss that does not grow with temperature
 */
export function timeToTemperature(node: OneNode | TwoNode, I: number, T_max: number): TimeToTemperature {
  checkFinite('T_max', T_max)
  const steady = steadyTemperature(node, I)
  if (node.T_amb >= T_max) return { kind: 'already there' }
  if (steady.kind === 'steady' && steady.celsius <= T_max) return { kind: 'never', steadyCelsius: steady.celsius }
  const { rates, winding } = heatModes(node, I)
  const wanted = T_max - node.T_amb
  // Time without any cooling is a lower bound; doubling from it brackets the crossing within the doubles' range.
  let high = wanted / rise([0, 0].slice(0, rates.length), winding, 1)
  let low = 0
  for (let k = 0; k < 1100 && rise(rates, winding, high) < wanted; k++) {
    low = high
    high *= 2
  }
  for (let k = 0; k < 200 && high - low > 1e-15 * high; k++) {
    const middle = (low + high) / 2
    if (middle <= low || middle >= high) break
    if (rise(rates, winding, middle) < wanted) low = middle
    else high = middle
  }
  return { kind: 'time', seconds: (low + high) / 2 }
}

/** Largest current (A) whose steady winding temperature is `T_max` (°C): √(ΔT / (R(T_max)·R_th)); 0 when ambient is at the limit. */
export function continuousCurrent(node: OneNode | TwoNode, T_max: number): number {
  checkNode(node)
  checkFinite('T_max', T_max)
  const R_th = 'R_th' in node ? node.R_th : node.R_wh + node.R_ha
  const rise = T_max - node.T_amb
  return rise <= 0 ? 0 : Math.sqrt(rise / (node.R * (1 + ALPHA_25 * (T_max - 25)) * R_th))
}

function checkNode(node: OneNode | TwoNode): void {
  for (const [field, value] of Object.entries(node)) guardNumber(field, value, field === 'T_amb' ? 'any' : 'positive')
}

function checkFinite(field: string, value: number): void {
  guardNumber(field, value, 'any')
}

/** Time at peak current as a finding takes it: one node alone cannot say how long a peak may last. */
export type PeakAssessment =
  | { kind: 'assessed'; time: TimeToTemperature }
  | { kind: 'not assessed'; reason: 'winding time constant missing'; time: TimeToTemperature }

/**
 * How long the peak current may last from ambient, with what the figure is worth.
 *
 * One node has the housing's time constant, some ten times too kind to the winding: the time is computed, not assessed.
 *
 * @source  control-model.md §6
 */
export function assessPeak(node: OneNode | TwoNode, I_peak: number, T_max: number): PeakAssessment {
  const time = timeToTemperature(node, I_peak, T_max)
  return 'R_th' in node ? { kind: 'not assessed', reason: 'winding time constant missing', time } : { kind: 'assessed', time }
}
