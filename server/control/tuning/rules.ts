/**
 * Published rules that turn a simple plant and its delays into controller gains.
 *
 * Gains are of the parallel form the firmware runs: K_p, K_i = K_p/T_i. Times in s.
 */
import { NumericError } from '../errors.ts'
import { guardNumber } from '../model.ts'

export interface PiGains {
  K_p: number
  K_i: number
}

/**
 * Pole and zero cancelled exactly in discrete time, gain for a wanted phase margin or crossover.
 *
 * With R, L and one period T: a = e^(−R·T/L), K_i = K_p·(1/a − 1)/T leaves the pure sampled integrator κ·z^(−D)/(z − 1),
 * κ = K_p·(1 − a)/(R·a). Its crossover angle is θ = 2·asin(κ/2), its phase margin exactly 90° − θ·(D + ½).
 *
 * @param supply  γ by which a request is multiplied before it reaches the motor
 * @throws        NumericError out-of-range when the margin leaves no gain or the crossover is past half the rate
 * @source        control-model.md §7
 */
export function poleZeroCancellation(
  plant: { R: number; L: number; T: number; D: number; supply: number },
  wanted: { phaseMarginDeg: number } | { crossoverHz: number },
): PiGains & { crossoverHz: number; phaseMarginDeg: number } {
  const { R, L, T, D, supply } = plant
  const delay = D + 0.5
  let theta: number
  if ('phaseMarginDeg' in wanted) {
    guardRange('phaseMarginDeg', wanted.phaseMarginDeg, 1, 89)
    theta = (((90 - wanted.phaseMarginDeg) / 180) * Math.PI) / delay
  } else {
    guardNumber('crossoverHz', wanted.crossoverHz, 'positive')
    theta = 2 * Math.PI * wanted.crossoverHz * T
  }
  // Beyond π an integrator sampled without delay has no crossover; with delay the margin ends sooner.
  theta = Math.min(theta, Math.PI)
  const phaseMarginDeg = 90 - (theta * delay * 180) / Math.PI
  if (!(phaseMarginDeg > 0)) {
    throw new NumericError('out-of-range', {
      field: 'crossoverHz',
      value: 'crossoverHz' in wanted ? wanted.crossoverHz : undefined,
      limit: 0.25 / (delay * T),
      text: `A current crossover of ${(theta / (2 * Math.PI * T)).toPrecision(4)} Hz leaves no phase margin with ${D} ticks of delay; nothing was computed. Stay below ${(0.25 / (delay * T)).toPrecision(4)} Hz.`,
    })
  }
  const a = Math.exp((-R * T) / L)
  const K_p = (2 * Math.sin(theta / 2) * R * a) / (-Math.expm1((-R * T) / L) * supply)
  return { K_p, K_i: (K_p * (1 / a - 1)) / T, crossoverHz: theta / (2 * Math.PI * T), phaseMarginDeg }
}

/**
 * Modulus optimum for gain/(1 + s·large) with the small delays gathered in T_sigma: 1/(2·T_σ·s·(1 + T_σ·s)) is left.
 *
 * @source  Kessler 1955; drives textbooks (from memory)
 */
export function modulusOptimum(plant: { gain: number; large: number; T_sigma: number }): PiGains {
  const K_p = plant.large / (2 * plant.gain * plant.T_sigma)
  return { K_p, K_i: K_p / plant.large }
}

/**
 * Symmetric optimum for slope/s with small delays T_sigma: (1 + a²·T·s)/(a³·T²·s²·(1 + T·s)) is left, with phase margin
 * atan a − atan 1/a at the crossover 1/(a·T).
 *
 * @param plant  slope: output per input and second
 * @source       Kessler 1958; drives textbooks (from memory)
 */
export function symmetricOptimum(plant: { slope: number; T_sigma: number }, a: number): PiGains {
  guardRange('a', a, 1.5, 20)
  const K_p = 1 / (plant.slope * a * plant.T_sigma)
  return { K_p, K_i: K_p / (a * a * plant.T_sigma) }
}

/** SIMC for a first-order lag with delay (`large` finite) or an integrator with delay (`slope`). */
export type SimcPlant = { gain: number; large: number; delay: number } | { slope: number; delay: number }

/**
 * SIMC: K_c = τ₁/(k·(τ_c + θ)), τ_I = min(τ₁, 4·(τ_c + θ)); for an integrator k′ = k/τ₁ with τ₁ without bound.
 *
 * @param tau_c  wanted closed-loop time constant; θ when absent ("tight control")
 * @source       S. Skogestad, J. Process Control 13 (2003) (from memory)
 */
export function simc(plant: SimcPlant, tau_c = plant.delay): PiGains {
  const sum = tau_c + plant.delay
  if ('slope' in plant) {
    const K_p = 1 / (plant.slope * sum)
    return { K_p, K_i: K_p / (4 * sum) }
  }
  const K_p = plant.large / (plant.gain * sum)
  return { K_p, K_i: K_p / Math.min(plant.large, 4 * sum) }
}

/**
 * PI for slope/s with a pure delay: crossover where wanted, the integral time from the wanted phase margin.
 *
 * Phase margin at ω: atan(ω·T_i) − ω·delay, since the integrator's −90° and the PI's own −90° meet at −180°.
 *
 * @throws  NumericError out-of-range, with the highest admissible crossover
 * @source  frequency-domain definition of the phase margin; no rule behind it
 */
export function crossoverPi(
  plant: { slope: number; delay: number },
  wanted: { crossoverHz: number; phaseMarginDeg: number },
): PiGains {
  guardNumber('crossoverHz', wanted.crossoverHz, 'positive')
  guardRange('phaseMarginDeg', wanted.phaseMarginDeg, 1, 89)
  const omega = 2 * Math.PI * wanted.crossoverHz
  const lead = (wanted.phaseMarginDeg / 180) * Math.PI + omega * plant.delay
  // An integral time of ten periods of the crossover is as good as none.
  const most = Math.atan(20 * Math.PI)
  if (lead >= most) {
    const limit = (most - (wanted.phaseMarginDeg / 180) * Math.PI) / (2 * Math.PI * plant.delay)
    throw new NumericError('out-of-range', {
      field: 'crossoverHz',
      value: wanted.crossoverHz,
      limit,
      text: `A crossover of ${wanted.crossoverHz} Hz with ${wanted.phaseMarginDeg}° of phase margin is beyond ${(plant.delay * 1e3).toPrecision(3)} ms of delay; nothing was computed. Ask for at most ${limit.toPrecision(3)} Hz, or shorten the window or the delays.`,
    })
  }
  const T_i = Math.tan(lead) / omega
  // |PI·slope/s| = 1 at ω: K_p·slope/ω·√(1 + 1/(ωT_i)²) = 1.
  const K_p = omega / (plant.slope * Math.hypot(1, 1 / (omega * T_i)))
  return { K_p, K_i: K_p / T_i }
}

export interface PidGains {
  K_p: number
  T_i: number
  T_d: number
}

/**
 * Ziegler and Nichols from the ultimate gain and period.
 *
 * @source  Ziegler & Nichols 1942, as in Åström & Murray, Feedback Systems, with the erratum's original PI gains
 */
export function ultimateGain(K_u: number, T_u: number, form: 'PI' | 'PID'): PidGains {
  return form === 'PI' ? { K_p: 0.45 * K_u, T_i: T_u / 1.2, T_d: 0 } : { K_p: 0.6 * K_u, T_i: T_u / 2, T_d: T_u / 8 }
}

/**
 * Ziegler and Nichols from a step's steepest slope R (per unit input) and apparent delay L.
 *
 * @source  as ultimateGain
 */
export function reactionCurve(R: number, L: number, form: 'PI' | 'PID'): PidGains {
  return form === 'PI' ? { K_p: 0.9 / (R * L), T_i: L / 0.3, T_d: 0 } : { K_p: 1.2 / (R * L), T_i: 2 * L, T_d: L / 2 }
}

function guardRange(field: string, value: number, low: number, high: number): void {
  guardNumber(field, value, 'any')
  if (value < low || value > high) {
    throw new NumericError('out-of-range', { field, value, text: `${field} is ${value}; it must be from ${low} to ${high}. Nothing was computed.` })
  }
}
