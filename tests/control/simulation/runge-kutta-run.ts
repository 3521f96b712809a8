/**
 * The same run by other means, for comparison: classical Runge–Kutta with small fixed steps, the mode chosen afresh at
 * every step, speed zeros and backlash edges cut out by halving the step; the firmware transcribed from control-model.md §2.
 */
import type { JointModel } from '../../../server/control/model.ts'

export interface PlainOptions {
  step_to: number
  theta_0: number
  t_end: number
  encoder_quantised: boolean
  current_quantised: boolean
  tau_load: number
  backlash: number
  source_resistance?: number
}

export interface PlainRun {
  theta: number[]
  omega: number[]
  i: number[]
  u: number[]
}

export function plainRun({ plant, firmware, environment }: JointModel, o: PlainOptions, p: number, q: number, stepsPerUnit: number): PlainRun {
  const P = plant
  const F = firmware
  const rigid = P.k_s === null
  const R = (P.R * (1 + 0.00393 * (environment.T_winding - 20))) / 1.01965 + P.R_on
  const J_m = P.eta * P.N ** 2 * P.J_rotor
  const tau_s = P.tau_s ?? P.tau_c
  // [i, ω_m, ω_l, δ, θ_l]; rigid keeps ω_m = ω_l and δ = 0.
  let x = [0, 0, 0, 0, o.theta_0]
  let v = 0
  let sliding = 0
  let side = 0

  const spring = (s: number[]): number => {
    if (o.backlash > 0 && side === 0) return 0
    return (P.k_s ?? 0) * (s[3] - (side * o.backlash) / 2) + (P.d_s ?? 0) * (s[1] - s[2])
  }
  const push = (s: number[]): number => (rigid ? P.eta * P.N * P.k_t * s[0] : spring(s)) - o.tau_load
  const rate = (s: number[]): number[] => {
    const di = (v - R * s[0] - P.N * P.k_e * s[1]) / P.L
    const held = tau_s > 0 && sliding === 0
    if (rigid) {
      const b = P.b_load + P.eta * P.N ** 2 * P.b_rotor
      const a = held ? 0 : (push(s) - b * s[1] - sliding * P.tau_c) / (P.J_load + J_m)
      return [di, a, a, 0, held ? 0 : s[2]]
    }
    const a_m = (P.eta * P.N * P.k_t * s[0] - P.eta * P.N ** 2 * P.b_rotor * s[1] - spring(s)) / J_m
    const a_l = held ? 0 : (push(s) - P.b_load * s[2] - sliding * P.tau_c) / P.J_load
    return [di, a_m, a_l, s[1] - s[2], held ? 0 : s[2]]
  }
  const add = (s: number[], k: number[], h: number): number[] => s.map((value, j) => value + h * k[j])
  const rk4 = (s: number[], h: number): number[] => {
    const k1 = rate(s)
    const k2 = rate(add(s, k1, h / 2))
    const k3 = rate(add(s, k2, h / 2))
    const k4 = rate(add(s, k3, h))
    return s.map((value, j) => value + (h / 6) * (k1[j] + 2 * k2[j] + 2 * k3[j] + k4[j]))
  }
  const broken = (s: number[]): boolean => {
    if (tau_s > 0 && (sliding === 0 ? Math.abs(push(s)) >= tau_s : sliding * s[2] < 0)) return true
    if (o.backlash === 0) return false
    return side === 0 ? Math.abs(s[3]) > o.backlash / 2 : side * s[3] < o.backlash / 2
  }
  const switchMode = (): void => {
    if (tau_s > 0 && sliding !== 0 && sliding * x[2] <= 0) {
      x[2] = 0
      if (rigid) x[1] = 0
      sliding = Math.abs(push(x)) < tau_s ? 0 : Math.sign(push(x))
    } else if (tau_s > 0 && sliding === 0 && Math.abs(push(x)) >= tau_s) sliding = Math.sign(push(x))
    if (o.backlash > 0) {
      if (side === 0 && Math.abs(x[3]) >= o.backlash / 2) side = Math.sign(x[3])
      else if (side !== 0 && side * x[3] <= o.backlash / 2) side = 0
    }
  }
  const move = (h: number): void => {
    let left = h
    for (let guard = 0; left > 0 && guard < 1000; guard++) {
      const whole = rk4(x, left)
      if (!broken(whole)) {
        x = whole
        return
      }
      let [good, bad] = [0, left]
      for (let k = 0; k < 60; k++) {
        const middle = (good + bad) / 2
        if (broken(rk4(x, middle))) bad = middle
        else good = middle
      }
      x = rk4(x, bad)
      left -= bad
      switchMode()
    }
  }
  switchMode()

  const lsb = ((2 * Math.PI) / 2 ** P.bits) / (P.encoder === 'motor' ? P.N : 1)
  const angle = (): number => {
    const theta = P.encoder === 'motor' ? x[4] + x[3] : x[4]
    return o.encoder_quantised ? Math.floor(theta / lsb) * lsb : theta
  }
  const [T_c, T_o] = [1 / F.f_c, 1 / F.f_o]
  const clamp = (value: number, limit: number): number => Math.max(-limit, Math.min(limit, value))
  const history: number[] = new Array<number>(F.W).fill(angle())
  const seen: number[] = new Array<number>(F.sensor_delay ?? 0).fill(angle())
  const late: number[] = new Array<number>(F.outer_delay ?? 0).fill(0)
  const requests: number[] = new Array<number>(F.D).fill(0)
  let [x_p, x_v, x_c, i_ref] = [0, 0, 0, 0]
  const outer = (): void => {
    const theta = seen.length > 0 ? seen[0] : angle()
    const speed = (theta - history[0]) / (F.W * T_o)
    history.shift()
    history.push(theta)
    let omega_ref = o.step_to
    if (F.mode === 'position') {
      const e = o.step_to - theta
      const old = x_p
      x_p += F.K_ip * T_o * e
      omega_ref = F.K_pp * e + x_p
      if (Math.abs(omega_ref) > F.omega_max && Math.sign(e) === Math.sign(omega_ref)) {
        x_p = old
        omega_ref = F.K_pp * e + x_p
      }
    }
    const e = clamp(omega_ref, F.omega_max) - speed
    const old = x_v
    x_v += F.K_iv * T_o * e
    let wanted = F.K_pv * e + x_v
    if (Math.abs(wanted) > F.I_max && Math.sign(e) === Math.sign(wanted)) {
      x_v = old
      wanted = F.K_pv * e + x_v
    }
    i_ref = clamp(wanted, F.I_max)
  }
  const out: PlainRun = { theta: [], omega: [], i: [], u: [] }
  const ticks = Math.round(o.t_end * F.f_c)
  for (let unit = 0; unit <= ticks * q; unit++) {
    const current = unit % q === 0
    if (current) {
      out.theta.push(x[4])
      out.omega.push(x[2])
      out.i.push(x[0])
    }
    if (F.mode !== 'current' && unit % p === 0) outer()
    if (current) {
      if (F.mode === 'current') i_ref = clamp(o.step_to, F.I_max)
      if (seen.length > 0) {
        seen.push(angle())
        seen.shift()
      }
      late.push(i_ref)
      const e = (late.shift() as number) - (o.current_quantised ? Math.round(x[0] / P.i_lsb) * P.i_lsb : x[0])
      const gamma = F.supply_compensated ? 1 : environment.V_bus / P.V_nom
      const old = x_c
      x_c += F.K_ic * T_c * e
      let u = F.K_pc * e + x_c
      if (Math.abs(u) > (F.d_max * environment.V_bus) / gamma && Math.sign(e) === Math.sign(u)) {
        x_c = old
        u = F.K_pc * e + x_c
      }
      out.u.push(u)
      requests.push(u)
      v = clamp((requests.shift() as number) * gamma, F.d_max * environment.V_bus)
    }
    for (let k = 0; k < stepsPerUnit; k++) move(T_c / q / stepsPerUnit)
  }
  return out
}
