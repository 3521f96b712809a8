import type { ControlMode } from './model.ts'
import type { OuterSteps } from './outer-steps.ts'
import type { SampledJoint } from './sampled-joint.ts'

/** The monodromy matrix of one closure over one hyperperiod (current loop: over one current tick). */
export interface Monodromy {
  readonly n: number
  /** n × n, row by row. */
  readonly Phi: Float64Array
  /** Real part of Φ above; the imaginary part where a complex factor stands in the broken signal. */
  readonly PhiIm: Float64Array | null
}

/** A factor g·e^{−jφ} on the broken signal of the loop that a closure adds last. */
export interface BreakFactor {
  readonly re: number
  readonly im: number
}

/**
 * Current loop over one current tick, states [x, x_c if K_ic ≠ 0, u of past ticks].
 *
 * @param factor  on the request `u`
 * @source control-model.md §3, §4
 */
export function currentMonodromy(joint: SampledJoint, factor: BreakFactor = { re: 1, im: 0 }): Monodromy {
  const { nx, Ad, Bd, gamma, model, timing } = joint
  const { D, K_pc, K_ic } = model.firmware
  const integrates = K_ic !== 0
  const xc = nx
  const u = nx + (integrates ? 1 : 0)
  const n = u + D
  const K = K_pc + K_ic * timing.T_c
  const build = (scale: number, withPlant: boolean): Float64Array => {
    const Phi = new Float64Array(n * n)
    const request = new Float64Array(n)
    request[0] = -K * scale
    if (integrates) request[xc] = scale
    const applied = new Float64Array(n)
    if (D === 0) for (let j = 0; j < n; j++) applied[j] = gamma * request[j]
    else if (withPlant) applied[u + D - 1] = gamma
    for (let i = 0; i < nx; i++) {
      if (withPlant) for (let j = 0; j < nx; j++) Phi[i * n + j] = Ad[i * nx + j]
      for (let j = 0; j < n; j++) Phi[i * n + j] += Bd[i] * applied[j]
    }
    if (integrates && withPlant) {
      Phi[xc * n] = -K_ic * timing.T_c
      Phi[xc * n + xc] = 1
    }
    if (D > 0) {
      for (let j = 0; j < n; j++) Phi[u * n + j] = request[j]
      if (withPlant) for (let j = 1; j < D; j++) Phi[(u + j) * n + u + j - 1] = 1
    }
    return Phi
  }
  return { n, Phi: build(factor.re, true), PhiIm: factor.im === 0 ? null : build(factor.im, false) }
}

/** Rows of the outer state in Φ: z at the start, then W increments, θ_s, x_p, x_v where they exist. */
export interface OuterLayout {
  readonly n: number
  readonly window: number
  /** −1 where the state does not exist. */
  readonly theta: number
  readonly xp: number
  readonly xv: number
}

export function outerLayout(joint: SampledJoint, steps: OuterSteps, closure: 'position' | 'velocity'): OuterLayout {
  const { W, K_ip, K_iv } = joint.model.firmware
  const window = steps.start.length
  let n = window + W
  const theta = closure === 'position' ? n++ : -1
  const xp = closure === 'position' && K_ip !== 0 ? n++ : -1
  const xv = K_iv !== 0 ? n++ : -1
  return { n, window, theta, xp, xv }
}

/**
 * Velocity or position closure over one hyperperiod, seen right after the outer sample at t = 0 and before the laws.
 *
 * The states are carried as columns through q outer steps; a complex factor doubles them (real and imaginary part).
 *
 * @param factor  on `i_ref` (velocity) or `ω_ref` (position)
 * @source control-model.md §2–§4
 */
export function outerMonodromy(
  joint: SampledJoint,
  steps: OuterSteps,
  closure: 'position' | 'velocity',
  factor: BreakFactor = { re: 1, im: 0 },
): Monodromy {
  const layout = outerLayout(joint, steps, closure)
  const { n } = layout
  const complex = factor.im !== 0
  // With a complex factor the columns stand side by side: real parts, then imaginary parts.
  const width = complex ? 2 * n : n
  const carrier = new OuterCarrier(joint, steps, closure, width)
  for (let i = 0; i < n; i++) carrier.setUnit(layout, i)
  carrier.run(factor)
  const Phi = new Float64Array(n * n)
  const PhiIm = complex ? new Float64Array(n * n) : null
  carrier.read(layout, (row, values) => {
    for (let c = 0; c < n; c++) {
      Phi[row * n + c] = values[c]
      if (PhiIm) PhiIm[row * n + c] = values[n + c]
    }
  })
  return { n, Phi, PhiIm }
}

/** Columns of outer states carried through the hyperperiod, one row of numbers for each state. */
export class OuterCarrier {
  private readonly rows: Float64Array[]
  private readonly spare: Float64Array[]
  private readonly ring: Float64Array[]
  private readonly sum: Float64Array
  private readonly angle: Float64Array
  private readonly xp: Float64Array
  private readonly xv: Float64Array
  private readonly reference: Float64Array
  private readonly delta: Float64Array
  private newest = 0
  private readonly joint: SampledJoint
  private readonly steps: OuterSteps
  private readonly closure: 'position' | 'velocity'
  private readonly width: number
  /** Added to the broken signal at every outer tick, one entry a column. */
  readonly injected: Float64Array
  /** Called at each outer tick with its index and the broken signal as it goes on: factor and injection included. */
  observe: ((k: number, broken: Float64Array) => void) | null = null
  /** Called at each outer tick with the broken signal as its law computes it, before factor and injection. */
  observeLaw: ((k: number, computed: Float64Array) => void) | null = null
  /** Called before each outer tick's laws; sets what is injected. */
  prepare: ((k: number, injected: Float64Array) => void) | null = null

  constructor(joint: SampledJoint, steps: OuterSteps, closure: 'position' | 'velocity', width: number) {
    this.joint = joint
    this.steps = steps
    this.closure = closure
    this.width = width
    const row = (): Float64Array => new Float64Array(width)
    this.rows = Array.from({ length: steps.nz }, row)
    this.spare = Array.from({ length: steps.nz }, row)
    this.ring = Array.from({ length: joint.model.firmware.W }, row)
    this.sum = row()
    this.angle = row()
    this.xp = row()
    this.xv = row()
    this.reference = row()
    this.delta = row()
    this.injected = row()
  }

  /** Puts a 1 into column i of state i. */
  setUnit(layout: OuterLayout, i: number): void {
    this.stateRow(layout, i)[i] = 1
    if (i >= layout.window && i < layout.window + this.ring.length) this.sum[i] = 1
  }

  /** Sets one column of every state. */
  setColumn(layout: OuterLayout, values: Float64Array, column: number): void {
    let sum = 0
    for (let i = 0; i < layout.n; i++) {
      this.stateRow(layout, i)[column] = values[i]
      if (i >= layout.window && i < layout.window + this.ring.length) sum += values[i]
    }
    this.sum[column] = sum
  }

  read(layout: OuterLayout, take: (row: number, values: Float64Array) => void): void {
    for (let i = 0; i < layout.n; i++) take(i, this.stateRow(layout, i))
  }

  private stateRow(layout: OuterLayout, i: number): Float64Array {
    if (i < layout.window) return this.rows[this.steps.start[i]]
    const W = this.ring.length
    if (i < layout.window + W) return this.ring[(this.newest + i - layout.window) % W]
    if (i === layout.theta) return this.angle
    return i === layout.xp ? this.xp : this.xv
  }

  /** Carries the columns through q outer ticks. */
  run(factor: BreakFactor): void {
    for (let k = 0; k < this.steps.q; k++) {
      this.prepare?.(k, this.injected)
      this.laws(k, factor)
      this.step(k)
    }
  }

  /** The outer task's work at one tick, reference 0 plus what is injected into the broken signal. */
  private laws(k: number, factor: BreakFactor): void {
    const { W, K_pp, K_ip, K_pv, K_iv } = this.joint.model.firmware
    const { T_o } = this.joint.timing
    const { width, sum, angle, xp, xv, reference, injected } = this
    const toSpeed = 1 / (W * T_o)
    const position = this.closure === 'position'
    if (position) {
      for (let c = 0; c < width; c++) {
        xp[c] -= K_ip * T_o * angle[c]
        reference[c] = xp[c] - K_pp * angle[c]
      }
      if (K_ip === 0) xp.fill(0)
      this.observeLaw?.(k, reference)
      scaleBy(reference, factor)
      for (let c = 0; c < width; c++) reference[c] += injected[c]
      this.observe?.(k, reference)
    }
    for (let c = 0; c < width; c++) {
      const e = (position ? reference[c] : 0) - sum[c] * toSpeed
      xv[c] += K_iv * T_o * e
      reference[c] = K_pv * e + xv[c]
    }
    if (K_iv === 0) xv.fill(0)
    if (!position) {
      this.observeLaw?.(k, reference)
      scaleBy(reference, factor)
      for (let c = 0; c < width; c++) reference[c] += injected[c]
      this.observe?.(k, reference)
    }
  }

  private step(k: number): void {
    const { steps, rows, spare, reference, delta, width } = this
    const { nz, shift } = steps
    const P = steps.powers[steps.length[k]]
    const g = steps.inputs[steps.length[k]]
    const base = k * nz
    accumulate(delta, reference, steps.d[k], true, width)
    for (let j = 0; j < nz; j++) accumulate(delta, rows[j], steps.H[base + j], false, width)
    for (let i = 0; i < nz; i++) {
      const out = spare[i]
      accumulate(out, reference, g[i], true, width)
      for (let j = 0; j < nz; j++) {
        const factor = P[i * nz + j]
        if (factor !== 0) accumulate(out, rows[j], factor, false, width)
      }
      if (shift[i] !== 0) accumulate(out, delta, -shift[i], false, width)
    }
    for (let i = 0; i < nz; i++) {
      const t = rows[i]
      rows[i] = spare[i]
      spare[i] = t
    }
    // Between holds θ counts from the sample: exactly 0 at a sample taken at the tick itself.
    this.newest = (this.newest + this.ring.length - 1) % this.ring.length
    const oldest = this.ring[this.newest]
    for (let c = 0; c < width; c++) {
      this.sum[c] += delta[c] - oldest[c]
      this.angle[c] += delta[c]
      oldest[c] = delta[c]
    }
  }
}

function accumulate(out: Float64Array, row: Float64Array, factor: number, fresh: boolean, width: number): void {
  if (fresh) for (let c = 0; c < width; c++) out[c] = factor * row[c]
  else for (let c = 0; c < width; c++) out[c] += factor * row[c]
}

/** Multiplies rows of [real | imaginary] columns by a complex factor; real rows by its real part. */
function scaleBy(row: Float64Array, factor: BreakFactor): void {
  if (factor.im === 0) {
    if (factor.re !== 1) for (let c = 0; c < row.length; c++) row[c] *= factor.re
    return
  }
  const half = row.length / 2
  for (let c = 0; c < half; c++) {
    const re = row[c]
    const im = row[half + c]
    row[c] = factor.re * re - factor.im * im
    row[half + c] = factor.re * im + factor.im * re
  }
}

/** The closures that a joint really closes, innermost first. */
export function closuresOf(mode: ControlMode): readonly ControlMode[] {
  if (mode === 'position') return ['current', 'velocity', 'position']
  return mode === 'velocity' ? ['current', 'velocity'] : ['current']
}
