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
  private readonly read: ComplexMatrix
  private readonly inner: ComplexMatrix
  private readonly middle: ComplexMatrix
  private readonly cosine: Float64Array
  private readonly sine: Float64Array
  private readonly wave: ComplexMatrix
  private readonly det = { re: 0, im: 0 }
  private readonly work: ComplexMatrix
  private readonly sensitivity: ComplexMatrix

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
    this.read = { n: q, re: new Float64Array(n * q), im: new Float64Array(n * q) }
    this.inner = complexMatrix(q)
    this.middle = complexMatrix(q)
    this.work = complexMatrix(q)
    this.sensitivity = complexMatrix(q)
    this.cosine = Float64Array.from({ length: q }, (_, k) => Math.cos((2 * Math.PI * k) / q))
    this.sine = Float64Array.from({ length: q }, (_, k) => Math.sin((2 * Math.PI * k) / q))
    this.wave = { n: q, re: new Float64Array(q * (q + 1)), im: new Float64Array(q * (q + 1)) }
  }

  /** Evaluates everything at z = e^{jθ}. */
  at(theta: number): void {
    this.plantAt(theta)
    this.lawsAt(theta)
  }

  private lawsAt(theta: number): void {
    const { q } = this
    const { W, K_pp, K_ip, K_pv, K_iv } = this.joint.model.firmware
    const { T_o } = this.joint.timing
    for (let m = 0; m < q; m++) {
      const t = theta + (2 * Math.PI * m) / q
      // d = 1 − 1/z and w = (1 − z^{−W})/d, free of cancellation.
      const s = Math.sin(t / 2)
      const dr = 2 * s * s
      const di = 2 * s * Math.cos(t / 2)
      const kernel = (s === 0 ? W : Math.sin((W * t) / 2) / s) / (W * T_o)
      const turn = (-(W - 1) * t) / 2
      this.window.re[m] = kernel * Math.cos(turn)
      this.window.im[m] = kernel * Math.sin(turn)
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
    const { resolvent, drive, read, wave } = this
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
    this.waves(theta)
    // Inputs at ticks 0…q−1 carry z_m^k, outputs at ticks 1…q are read with z_m^{−k}.
    const each = 1 / q
    for (let i = 0; i < n; i++) {
      for (let m = 0; m < q; m++) {
        let sr = 0
        let si = 0
        let tr = 0
        let ti = 0
        for (let k = 0; k < q; k++) {
          const b = B[i * q + k]
          sr += b * wave.re[k * q + m]
          si += b * wave.im[k * q + m]
          const c = C[k * n + i]
          tr += c * wave.re[(k + 1) * q + m]
          ti -= c * wave.im[(k + 1) * q + m]
        }
        drive.re[i * q + m] = sr
        drive.im[i * q + m] = si
        read.re[m * n + i] = tr * each
        read.im[m * n + i] = ti * each
      }
    }
    solveComplex(resolvent, drive, q, this.det)
    this.directPart(D)
    for (let a = 0; a < q; a++) {
      for (let b = 0; b < q; b++) {
        let sr = 0
        let si = 0
        for (let i = 0; i < n; i++) {
          const cr = read.re[a * n + i]
          const ci = read.im[a * n + i]
          const xr = drive.re[i * q + b]
          const xi = drive.im[i * q + b]
          sr += cr * xr - ci * xi
          si += cr * xi + ci * xr
        }
        P.re[a * q + b] += sr
        P.im[a * q + b] += si
      }
    }
  }

  /** wave[k][m] = e^{j(θ + 2πm/q)k}, k = 0…q. */
  private waves(theta: number): void {
    const { q, wave, cosine, sine } = this
    for (let k = 0; k <= q; k++) {
      const br = Math.cos(k * theta)
      const bi = Math.sin(k * theta)
      let at = 0
      for (let m = 0; m < q; m++) {
        wave.re[k * q + m] = br * cosine[at] - bi * sine[at]
        wave.im[k * q + m] = br * sine[at] + bi * cosine[at]
        at += k
        while (at >= q) at -= q
      }
    }
  }

  /** P ← D in the basis of exponentials. */
  private directPart(D: Float64Array): void {
    const { q, P, inner, wave } = this
    for (let k = 0; k < q; k++) {
      for (let m = 0; m < q; m++) {
        let sr = 0
        let si = 0
        for (let c = 0; c <= k; c++) {
          const d = D[k * q + c]
          sr += d * wave.re[c * q + m]
          si += d * wave.im[c * q + m]
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
        for (let k = 0; k < q; k++) {
          const yr = wave.re[(k + 1) * q + a]
          const yi = wave.im[(k + 1) * q + a]
          const dr = inner.re[k * q + b]
          const di = inner.im[k * q + b]
          sr += yr * dr + yi * di
          si += yr * di - yi * dr
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
    const { q, P, velocityLaw, positionLaw, middle, work } = this
    this.velocityLoop(work)
    invertSensitivity(work, middle, this.det)
    for (let a = 0; a < q; a++) {
      for (let b = 0; b < q; b++) {
        let sr = 0
        let si = 0
        for (let k = 0; k < q; k++) {
          const pr = P.re[a * q + k]
          const pi = P.im[a * q + k]
          const xr = middle.re[k * q + b]
          const xi = middle.im[k * q + b]
          sr += pr * xr - pi * xi
          si += pr * xi + pi * xr
        }
        const cr = velocityLaw.re[b]
        const ci = velocityLaw.im[b]
        out.re[a * q + b] = sr * cr - si * ci
        out.im[a * q + b] = sr * ci + si * cr
      }
    }
    for (let a = 0; a < q; a++) scaleRow(out, out, a, positionLaw.re[a], positionLaw.im[a])
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
    const { q, work, sensitivity } = this
    this.loop(closure, this.inner)
    out.L_re = this.inner.re[0]
    out.L_im = this.inner.im[0]
    work.re.set(this.inner.re)
    work.im.set(this.inner.im)
    invertSensitivity(work, sensitivity, this.det)
    let sr = 0
    let si = 0
    for (let k = 0; k < q; k++) {
      const lr = this.inner.re[k]
      const li = this.inner.im[k]
      const xr = sensitivity.re[k * q]
      const xi = sensitivity.im[k * q]
      sr += lr * xr - li * xi
      si += lr * xi + li * xr
    }
    out.T_re = sr
    out.T_im = si
  }
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
