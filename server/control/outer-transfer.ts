import { complexMatrix, solveComplex, type ComplexMatrix } from './complex-matrix.ts'
import type { LiftedPlant } from './lifted-plant.ts'
import type { SampledJoint } from './sampled-joint.ts'

/**
 * The outer loops in the frequency domain, exact for every ratio of rates.
 *
 * At a frequency θ (radians per outer tick) the hyperperiod couples the q frequencies θ + 2πm/q. In the basis of these
 * exponentials (unitary on the unit circle) the laws and the window are diagonal and only the plant's increment is a full
 * q × q matrix; for q = 1 all of it is scalar.
 */
/** P at frequencies that the transfer which asked last remembers; another one that asks takes it over, for an array of its own would cost more than it saves. */
const memory = new Float64Array(16_384)
let rememberedFor: object | null = null

export class OuterTransfer {
  readonly q: number
  /** i_ref → increment of θ. */
  readonly P: ComplexMatrix
  /** Per frequency m: window estimate, velocity law, position law with its integrator of increments. */
  readonly window: ComplexMatrix
  readonly velocityLaw: ComplexMatrix
  readonly positionLaw: ComplexMatrix
  private readonly plant: LiftedPlant
  private readonly joint: SampledJoint
  private readonly resolvent: ComplexMatrix
  private readonly drive: ComplexMatrix
  private readonly inner: ComplexMatrix
  private readonly middle: ComplexMatrix
  private readonly cosine: Float64Array
  private readonly sine: Float64Array
  // Half the angle between the frequencies, and W times that: cosine and sine by m.
  private readonly half: Float64Array
  private readonly halfW: Float64Array
  private readonly base: Float64Array
  // Where in the memory P stands, by frequency.
  private readonly kept = new Map<number, number>()
  private readonly det = { re: 0, im: 0 }
  private readonly work: ComplexMatrix
  private readonly column: ComplexMatrix

  constructor(joint: SampledJoint, plant: LiftedPlant) {
    const { q, n } = plant
    this.q = q
    this.joint = joint
    this.plant = plant
    this.P = complexMatrix(q)
    this.window = complexMatrix(1, q)
    this.velocityLaw = complexMatrix(1, q)
    this.positionLaw = complexMatrix(1, q)
    this.resolvent = complexMatrix(n)
    this.drive = { n, re: new Float64Array(n * q), im: new Float64Array(n * q) }
    this.inner = complexMatrix(q)
    this.middle = complexMatrix(q)
    this.work = complexMatrix(q)
    this.column = complexMatrix(q, 1)
    this.cosine = Float64Array.from({ length: q }, (_, k) => Math.cos((2 * Math.PI * k) / q))
    this.sine = Float64Array.from({ length: q }, (_, k) => Math.sin((2 * Math.PI * k) / q))
    const { W } = joint.model.firmware
    this.half = turns(q, 1)
    this.halfW = turns(q, W)
    this.base = new Float64Array(2 * (q + 1))
  }

  /** Evaluates everything at z = e^{jθ}. */
  at(theta: number): void {
    this.plantAt(theta)
    this.lawsAt(theta)
  }

  /** As `at`, remembering: two loops of one joint, and their peaks, ask for the same frequencies. */
  atAgain(theta: number): void {
    const { kept, P } = this
    const size = P.re.length
    if (rememberedFor !== kept) {
      rememberedFor = kept
      kept.clear()
    }
    let at = kept.get(theta)
    if (at === undefined) {
      this.plantAt(theta)
      at = kept.size * 2 * size
      if (at + 2 * size <= memory.length) {
        kept.set(theta, at)
        for (let k = 0; k < size; k++) {
          memory[at + k] = P.re[k]
          memory[at + size + k] = P.im[k]
        }
      }
    } else {
      for (let k = 0; k < size; k++) {
        P.re[k] = memory[at + k]
        P.im[k] = memory[at + size + k]
      }
    }
    this.lawsAt(theta)
  }

  private lawsAt(theta: number): void {
    const { q } = this
    const { W, K_pp, K_ip, K_pv, K_iv } = this.joint.model.firmware
    const { T_o } = this.joint.timing
    const { half, halfW } = this
    const ch = Math.cos(theta / 2)
    const sh = Math.sin(theta / 2)
    const cW = Math.cos((W * theta) / 2)
    const sW = Math.sin((W * theta) / 2)
    for (let m = 0; m < q; m++) {
      // Sine and cosine of t/2 and W·t/2, t = θ + 2πm/q, by turning those of θ/2 and W·θ/2.
      const c = ch * half[2 * m] - sh * half[2 * m + 1]
      const s = sh * half[2 * m] + ch * half[2 * m + 1]
      const cw = cW * halfW[2 * m] - sW * halfW[2 * m + 1]
      const sw = sW * halfW[2 * m] + cW * halfW[2 * m + 1]
      // d = 1 − 1/z and w = (1 − z^{−W})/d, free of cancellation.
      const dr = 2 * s * s
      const di = 2 * s * c
      const kernel = (s === 0 ? W : sw / s) / (W * T_o)
      this.window.re[m] = kernel * (cw * c + sw * s)
      this.window.im[m] = kernel * (cw * s - sw * c)
      const size = 1 / (dr * dr + di * di)
      const ir = dr * size
      const ii = -di * size
      this.velocityLaw.re[m] = K_pv + (K_iv === 0 ? 0 : K_iv * T_o * ir)
      this.velocityLaw.im[m] = K_iv === 0 ? 0 : K_iv * T_o * ii
      const pr = K_pp + (K_ip === 0 ? 0 : K_ip * T_o * ir)
      const pi = K_ip === 0 ? 0 : K_ip * T_o * ii
      this.positionLaw.re[m] = pr * ir - pi * ii
      this.positionLaw.im[m] = pr * ii + pi * ir
    }
  }

  private plantAt(theta: number): void {
    const { q, P } = this
    const { n, A, B, C, D } = this.plant
    const { resolvent, drive } = this
    const turn = q * theta
    const lr = Math.cos(turn)
    const li = Math.sin(turn)
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        resolvent.re[i * n + j] = -A[i * n + j]
        resolvent.im[i * n + j] = 0
      }
      resolvent.re[i * n + i] += lr
      resolvent.im[i * n + i] += li
    }
    if (q === 1) {
      for (let i = 0; i < n; i++) {
        drive.re[i] = B[i]
        drive.im[i] = 0
      }
      solveComplex(resolvent, drive, 1, this.det)
      let sr = D[0]
      let si = 0
      for (let i = 0; i < n; i++) {
        sr += C[i] * drive.re[i]
        si += C[i] * drive.im[i]
      }
      // The increment is read one outer tick after the reference acts.
      P.re[0] = sr * lr + si * li
      P.im[0] = si * lr - sr * li
      return
    }
    for (let k = 0; k < n * q; k++) {
      drive.re[k] = B[k]
      drive.im[k] = 0
    }
    solveComplex(resolvent, drive, q, this.det)
    for (let a = 0; a < q; a++) {
      for (let b = 0; b < q; b++) {
        let sr = D[a * q + b]
        let si = 0
        for (let i = 0; i < n; i++) {
          const c = C[a * n + i]
          sr += c * drive.re[i * q + b]
          si += c * drive.im[i * q + b]
        }
        P.re[a * q + b] = sr
        P.im[a * q + b] = si
      }
    }
    this.toWaves(theta)
  }

  /**
   * P from ticks to exponentials: inputs at ticks c = 0…q−1 carry z_m^c, outputs at ticks k + 1 = 1…q are read with z_m^{−(k+1)}.
   *
   * z_m = e^{jθ}·e^{j2πm/q}: what θ turns is taken out of every entry first, the rest is a discrete Fourier sum on either side.
   */
  private toWaves(theta: number): void {
    const { q, P, inner, cosine, sine, base } = this
    const c = Math.cos(theta)
    const s = Math.sin(theta)
    let br = 1
    let bi = 0
    for (let k = 0; k <= q; k++) {
      base[2 * k] = br
      base[2 * k + 1] = bi
      const t = br * c - bi * s
      bi = br * s + bi * c
      br = t
    }
    for (let k = 0; k < q; k++) {
      for (let j = 0; j < q; j++) {
        const back = j <= k
        const by = 2 * (back ? k + 1 - j : j - k - 1)
        const yr = base[by]
        const yi = back ? -base[by + 1] : base[by + 1]
        const at = k * q + j
        const pr = P.re[at]
        const pi = P.im[at]
        P.re[at] = pr * yr - pi * yi
        P.im[at] = pr * yi + pi * yr
      }
    }
    for (let k = 0; k < q; k++) {
      for (let m = 0; m < q; m++) {
        let sr = 0
        let si = 0
        for (let j = 0, turn = 0; j < q; j++) {
          const dr = cosine[turn]
          const di = sine[turn]
          const pr = P.re[k * q + j]
          const pi = P.im[k * q + j]
          sr += pr * dr - pi * di
          si += pr * di + pi * dr
          turn += m
          if (turn >= q) turn -= q
        }
        inner.re[k * q + m] = sr
        inner.im[k * q + m] = si
      }
    }
    const each = 1 / q
    for (let a = 0; a < q; a++) {
      for (let b = 0; b < q; b++) {
        let sr = 0
        let si = 0
        for (let k = 0, turn = a; k < q; k++) {
          const yr = cosine[turn]
          const yi = sine[turn]
          const dr = inner.re[k * q + b]
          const di = inner.im[k * q + b]
          sr += yr * dr + yi * di
          si += yr * di - yi * dr
          turn += a
          if (turn >= q) turn -= q
        }
        P.re[a * q + b] = sr * each
        P.im[a * q + b] = si * each
      }
    }
  }

  /** Loop broken at i_ref: velocity law · window · P. */
  velocityLoop(out: ComplexMatrix): void {
    const { q, P, window, velocityLaw } = this
    for (let a = 0; a < q; a++) {
      const gr = velocityLaw.re[a] * window.re[a] - velocityLaw.im[a] * window.im[a]
      const gi = velocityLaw.re[a] * window.im[a] + velocityLaw.im[a] * window.re[a]
      scaleRow(P, out, a, gr, gi)
    }
  }

  /** Loop broken at ω_ref, the velocity loop closed: position law · P·(I + L_velocity)⁻¹ · velocity law. */
  positionLoop(out: ComplexMatrix): void {
    const { q, P, window, velocityLaw, positionLaw, middle, work } = this
    // X·(I + L_velocity) = P, solved in its transposed form: (I + L_velocity)ᵀ·Xᵀ = Pᵀ.
    for (let a = 0; a < q; a++) {
      const gr = velocityLaw.re[a] * window.re[a] - velocityLaw.im[a] * window.im[a]
      const gi = velocityLaw.re[a] * window.im[a] + velocityLaw.im[a] * window.re[a]
      for (let b = 0; b < q; b++) {
        const xr = P.re[a * q + b]
        const xi = P.im[a * q + b]
        middle.re[b * q + a] = xr
        middle.im[b * q + a] = xi
        work.re[b * q + a] = gr * xr - gi * xi
        work.im[b * q + a] = gr * xi + gi * xr
      }
      work.re[a * q + a] += 1
    }
    solveComplex(work, middle, q, this.det)
    for (let b = 0; b < q; b++) {
      const vr = velocityLaw.re[b]
      const vi = velocityLaw.im[b]
      for (let a = 0; a < q; a++) {
        const fr = positionLaw.re[a] * vr - positionLaw.im[a] * vi
        const fi = positionLaw.re[a] * vi + positionLaw.im[a] * vr
        const xr = middle.re[b * q + a]
        const xi = middle.im[b * q + a]
        out.re[a * q + b] = fr * xr - fi * xi
        out.im[a * q + b] = fr * xi + fi * xr
      }
    }
  }

  loop(closure: 'velocity' | 'position', out: ComplexMatrix): void {
    if (closure === 'velocity') this.velocityLoop(out)
    else this.positionLoop(out)
  }

  /**
   * Fundamental component of the loop (L) and of measured over reference (T) at the frequency last evaluated.
   *
   * @source control-model.md §4
   */
  fundamental(closure: 'velocity' | 'position', out: { L_re: number; L_im: number; T_re: number; T_im: number }): void {
    const { q, work, column } = this
    this.loop(closure, this.inner)
    out.L_re = this.inner.re[0]
    out.L_im = this.inner.im[0]
    // T = (first row of L)·x with (I + L)·x = the fundamental alone.
    work.re.set(this.inner.re)
    work.im.set(this.inner.im)
    for (let k = 0; k < q; k++) {
      work.re[k * q + k] += 1
      column.re[k] = k === 0 ? 1 : 0
      column.im[k] = 0
    }
    solveComplex(work, column, 1, this.det)
    let sr = 0
    let si = 0
    for (let k = 0; k < q; k++) {
      const lr = this.inner.re[k]
      const li = this.inner.im[k]
      const xr = column.re[k]
      const xi = column.im[k]
      sr += lr * xr - li * xi
      si += lr * xi + li * xr
    }
    out.T_re = sr
    out.T_im = si
  }
}

/** Cosine and sine of πmW/q, m = 0…q−1, reduced to one turn first. */
function turns(q: number, W: number): Float64Array {
  const out = new Float64Array(2 * q)
  for (let m = 0; m < q; m++) {
    const angle = (Math.PI * ((m * W) % (2 * q))) / q
    out[2 * m] = Math.cos(angle)
    out[2 * m + 1] = Math.sin(angle)
  }
  return out
}

function scaleRow(from: ComplexMatrix, to: ComplexMatrix, row: number, gr: number, gi: number): void {
  const { n } = from
  for (let c = row * n; c < (row + 1) * n; c++) {
    const xr = from.re[c]
    const xi = from.im[c]
    to.re[c] = gr * xr - gi * xi
    to.im[c] = gr * xi + gi * xr
  }
}

/** out ← (I + L)⁻¹; L is spoilt. */
export function invertSensitivity(L: ComplexMatrix, out: ComplexMatrix, det: { re: number; im: number }): void {
  const { n } = L
  out.re.fill(0)
  out.im.fill(0)
  for (let a = 0; a < n; a++) {
    L.re[a * n + a] += 1
    out.re[a * n + a] = 1
  }
  solveComplex(L, out, n, det)
}
