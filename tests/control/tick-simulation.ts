import type { JointModel } from '../../server/control/model.ts'

/**
 * The firmware's pseudo-code (control-model.md §2), linear, run tick by tick. Written apart from the program: own plant equations, own
 * Taylor-series integration, ordinary queues for window and delays.
 */
export function growthPerHyperperiod(model: JointModel, hyperperiods: number, p: number, q: number): number {
  const { plant, firmware: f, environment } = model
  const R = (plant.R * (1 + 0.00393 * (environment.T_winding - 20))) / 1.01965 + plant.R_on
  const rotor = plant.eta * plant.N ** 2 * plant.J_rotor
  const drag = plant.eta * plant.N ** 2 * plant.b_rotor
  const torque = plant.eta * plant.N * plant.k_t
  const gamma = f.supply_compensated ? 1 : environment.V_bus / plant.V_nom
  const T_c = 1 / f.f_c
  const T_o = 1 / f.f_o
  const compliant = plant.k_s !== null
  // x = [i, ω_m, ω_l, δ, θ_l]; rigid: ω_m = ω_l and δ = 0.
  const rate = (x: number[], v: number): number[] => {
    const [i, wm, wl, d] = x
    const di = (v - R * i - plant.N * plant.k_e * wm) / plant.L
    if (!compliant) {
      const a = (torque * i - (plant.b_load + drag) * wm) / (plant.J_load + rotor)
      return [di, a, a, 0, wm]
    }
    const shaft = (plant.k_s as number) * d + (plant.d_s as number) * (wm - wl)
    return [di, (torque * i - drag * wm - shaft) / rotor, (shaft - plant.b_load * wl) / plant.J_load, wm - wl, wl]
  }
  const grid = T_c / q
  const rough = Math.max((R + plant.N * plant.k_e) / plant.L, torque / (plant.J_load + rotor), compliant ? Math.sqrt((plant.k_s as number) / rotor + (plant.k_s as number) / plant.J_load) : 0)
  const parts = Math.max(1, Math.ceil(grid * rough * 2))
  const integrate = (x: number[], v: number): number[] => {
    let y = x
    for (let s = 0; s < parts; s++) {
      const h = grid / parts
      // Σ hⁿ/n!·x⁽ⁿ⁾; the derivatives beyond the first are linear in the last.
      let term = rate(y, v).map((a) => a * h)
      let sum = y.map((a, k) => a + term[k])
      for (let n = 2; n < 24; n++) {
        term = rate(term, 0).map((a) => (a * h) / n)
        sum = sum.map((a, k) => a + term[k])
      }
      y = sum
    }
    return y
  }
  // One grid step is linear: integrated once for each state and for the voltage.
  const columns = [0, 1, 2, 3, 4].map((k) => integrate([0, 1, 2, 3, 4].map((j) => (j === k ? 1 : 0)), 0))
  const drive = integrate([0, 0, 0, 0, 0], 1)
  const move = (y: number[], u: number): number[] => drive.map((d, i) => d * u + columns[0][i] * y[0] + columns[1][i] * y[1] + columns[2][i] * y[2] + columns[3][i] * y[3] + columns[4][i] * y[4])
  let x = [0.3, 0.7, compliant ? -0.2 : 0.7, compliant ? 0.001 : 0, 0.05]
  const read = (): number => x[4] + (plant.encoder === 'motor' ? x[3] : 0)
  let xp = 0
  let xv = 0
  let xc = 0
  let iRef = 0
  const past: number[] = new Array<number>(f.W).fill(read())
  const requests: number[] = new Array<number>(f.D).fill(0)
  const angles: number[] = new Array<number>(f.sensor_delay ?? 0).fill(read())
  const held: number[] = new Array<number>(f.outer_delay ?? 0).fill(0)
  let v = 0
  let log = 0
  let middle = 0
  const norm = (): number => {
    const size = Math.abs(x[0]) + Math.abs(x[1]) + Math.abs(x[2]) + Math.abs(x[3]) * 100 + Math.abs(xc) + Math.abs(xv) + (f.mode === 'position' ? Math.abs(x[4]) * 10 + Math.abs(xp) : 0)
    return size
  }
  for (let H = 0; H < hyperperiods; H++) {
    for (let g = 0; g < p * q; g++) {
      if (g % p === 0 && f.mode !== 'current') {
        const theta = angles.length > 0 ? angles[angles.length - 1] : read()
        const omega = (theta - past[f.W - 1]) / (f.W * T_o)
        past.pop()
        past.unshift(theta)
        let reference = 0
        if (f.mode === 'position') {
          xp += f.K_ip * T_o * -theta
          reference = f.K_pp * -theta + xp
        }
        const e = reference - omega
        xv += f.K_iv * T_o * e
        iRef = f.K_pv * e + xv
      }
      if (g % q === 0) {
        let effective = iRef
        if (held.length > 0) {
          effective = held.pop() as number
          held.unshift(iRef)
        }
        const e = effective - x[0]
        xc += f.K_ic * T_c * e
        const u = f.K_pc * e + xc
        requests.unshift(u)
        v = gamma * (requests.pop() as number)
        if (angles.length > 0) {
          angles.pop()
          angles.unshift(read())
        }
      }
      x = move(x, v)
      if (!compliant) x[2] = x[1]
    }
    // Outside position mode the angle itself means nothing: its origin follows, lest its rounding drown what decays.
    if (f.mode !== 'position') {
      const origin = x[4]
      x[4] = 0
      for (const list of [past, angles]) for (let k = 0; k < list.length; k++) list[k] -= origin
    }
    // Scaled back now and then, so that neither growth nor decay leaves the range of a double.
    const size = norm()
    if (size > 1e50 || size < 1e-50) {
      log += Math.log(size)
      const s = 1 / size
      x = x.map((a) => a * s)
      xp *= s
      xv *= s
      xc *= s
      iRef *= s
      v *= s
      for (const list of [past, requests, angles, held]) for (let k = 0; k < list.length; k++) list[k] *= s
    }
    if (H === Math.floor(hyperperiods / 2)) middle = log + Math.log(norm())
  }
  return (log + Math.log(norm()) - middle) / (hyperperiods - 1 - Math.floor(hyperperiods / 2))
}
