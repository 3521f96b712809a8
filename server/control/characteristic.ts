import { complexMatrix, solveComplex, type ComplexMatrix } from './complex-matrix.ts'
import type { LiftedPlant } from './lifted-plant.ts'
import type { Firmware } from './model.ts'
import { PlantFraction } from './plant-fraction.ts'

/**
 * The characteristic polynomial det(λI − Φ) of the outer closures, built without Φ.
 *
 * With λ given, the window's W old samples are the same q samples of this hyperperiod divided by powers of λ, and the integrators are
 * geometric sums; what is left is a q × q determinant over the lifted plant. It is evaluated on the unit circle, half-way
 * between the roots of unity (the integrators' pole at 1 is no node), and its coefficients follow by a discrete Fourier sum.
 * The polynomial is monic of known degree, so its leading coefficient tells how exact the rest is.
 *
 * Cost: (W + n)/2 determinants of q × q, against 10·(W + n)³ for all eigenvalues of Φ.
 */
export class Characteristic {
  readonly degree: number
  /** Coefficients c[k] of λ^k after `expand`. */
  readonly c: Float64Array
  private readonly q: number
  private readonly n: number
  private readonly W: number
  private readonly position: boolean
  private readonly integrators: number
  private readonly nodes: number
  // Nodes in the upper half plane and their powers.
  private readonly nodeRe: Float64Array
  private readonly nodeIm: Float64Array
  private readonly fourier: Float64Array
  private readonly valueRe: Float64Array
  private readonly valueIm: Float64Array
  // χ·P as numerators, and χ·P and χ at the nodes.
  private readonly fraction: PlantFraction
  private readonly nodeN: Float64Array
  private readonly nodeChi: Float64Array
  // Where sample k − W falls in the hyperperiod (1…q), and how many hyperperiods ago.
  private readonly source: Int32Array
  private readonly age: Int32Array
  private readonly ages: Int32Array
  private readonly oldestAge: number
  // What depends on λ alone: λ⁻¹, 1/(λ − 1), λ^W·(λ − 1)^integrators, and the powers of λ⁻¹ by age; one row a node, one row spare.
  private readonly stride: number
  private readonly nodeConstants: Float64Array
  private readonly constants: Float64Array
  private readonly matrix: ComplexMatrix
  private readonly column: Float64Array
  private readonly det = { re: 0, im: 0 }
  private readonly scratch: Float64Array
  private readonly resolvent: ComplexMatrix
  private readonly drive: ComplexMatrix
  private lifted: LiftedPlant | null = null
  private gains: Firmware | null = null
  private T_o = 0

  constructor(q: number, n: number, W: number, position: boolean, integrators: number) {
    this.q = q
    this.n = n
    this.W = W
    this.position = position
    this.integrators = integrators
    this.degree = n + W + integrators
    this.c = new Float64Array(this.degree + 1)
    // An even number of nodes, at least degree + 1, none of them real.
    this.nodes = 2 * Math.ceil((this.degree + 1) / 2)
    const half = this.nodes / 2
    this.nodeRe = Float64Array.from({ length: half }, (_, j) => Math.cos((Math.PI * (2 * j + 1)) / this.nodes))
    this.nodeIm = Float64Array.from({ length: half }, (_, j) => Math.sin((Math.PI * (2 * j + 1)) / this.nodes))
    this.fourier = new Float64Array(2 * half * (this.degree + 1))
    for (let j = 0; j < half; j++) {
      for (let k = 0; k <= this.degree; k++) {
        const angle = (Math.PI * (((2 * j + 1) * k) % (2 * this.nodes))) / this.nodes
        const at = 2 * (k * half + j)
        this.fourier[at] = (2 / this.nodes) * Math.cos(angle)
        this.fourier[at + 1] = (2 / this.nodes) * Math.sin(angle)
      }
    }
    this.valueRe = new Float64Array(half)
    this.valueIm = new Float64Array(half)
    this.fraction = new PlantFraction(q, n)
    this.nodeN = new Float64Array(2 * half * q * q)
    this.nodeChi = new Float64Array(2 * half)
    this.source = new Int32Array(q + 1)
    this.age = new Int32Array(q + 1)
    for (let k = 1; k <= q; k++) {
      // Shift k − W by whole hyperperiods into 1…q.
      const age = Math.max(0, Math.ceil((1 - (k - W)) / q))
      this.age[k] = age
      this.source[k] = k - W + age * q
    }
    this.ages = Int32Array.from(new Set(this.age.subarray(1)))
    this.oldestAge = Math.max(...this.ages)
    this.stride = 8 + 2 * this.oldestAge
    this.constants = new Float64Array(this.stride)
    this.nodeConstants = new Float64Array(half * this.stride)
    for (let j = 0; j < half; j++) this.constantsAt(this.nodeRe[j], this.nodeIm[j], this.nodeConstants, j * this.stride)
    this.matrix = complexMatrix(q)
    this.column = new Float64Array(2 * (q + 1))
    this.scratch = new Float64Array(2 * q * q)
    this.resolvent = complexMatrix(n)
    this.drive = { n, re: new Float64Array(n * q), im: new Float64Array(n * q) }
  }

  /** Takes a plant: its numerators, then their values at the nodes. */
  setPlant(lifted: LiftedPlant): void {
    const { n, q } = this
    this.lifted = lifted
    this.fraction.take(lifted)
    const { numerators, chi } = this.fraction
    const size = q * q
    const half = this.nodes / 2
    for (let j = 0; j < half; j++) {
      const lr = this.nodeRe[j]
      const li = this.nodeIm[j]
      const at = 2 * j * size
      for (let e = 0; e < size; e++) {
        // Horner in λ with real coefficients.
        let re = numerators[n * size + e]
        let im = 0
        for (let k = n - 1; k >= 0; k--) {
          const t = re * lr - im * li + numerators[k * size + e]
          im = re * li + im * lr
          re = t
        }
        this.nodeN[at + 2 * e] = re
        this.nodeN[at + 2 * e + 1] = im
      }
      let re = 1
      let im = 0
      for (let k = n - 1; k >= 0; k--) {
        const t = re * lr - im * li + chi[k]
        im = re * li + im * lr
        re = t
      }
      this.nodeChi[2 * j] = re
      this.nodeChi[2 * j + 1] = im
    }
  }

  /** Whether this very lift was taken last. */
  holds(lifted: LiftedPlant): boolean {
    return this.lifted === lifted
  }

  setLaws(gains: Firmware, T_o: number): void {
    this.gains = gains
    this.T_o = T_o
  }

  /**
   * Computes the coefficients.
   *
   * @returns  error of the coefficients relative to the largest, as the leading one shows it
   */
  expand(): number {
    const { degree, c, fourier, valueRe, valueIm, q } = this
    const half = this.nodes / 2
    for (let j = 0; j < half; j++) {
      this.determinant(this.nodeN, 2 * j * q * q, this.nodeChi[2 * j], this.nodeChi[2 * j + 1], this.nodeConstants, j * this.stride)
      valueRe[j] = this.det.re
      valueIm[j] = this.det.im
    }
    let largest = 0
    for (let k = 0; k <= degree; k++) {
      let sum = 0
      const row = 2 * k * half
      for (let j = 0; j < half; j++) sum += valueRe[j] * fourier[row + 2 * j] + valueIm[j] * fourier[row + 2 * j + 1]
      c[k] = sum
      const s = Math.abs(sum)
      if (s > largest) largest = s
    }
    const off = Math.abs(c[degree] - 1) / largest
    c[degree] = 1
    return Math.max(off, 1e-15)
  }

  /**
   * det(λI − Φ) at one λ without expanding: as exact as solving with λI − A is.
   *
   * @param out  receives the value
   */
  valueAt(re: number, im: number, out: { re: number; im: number }): void {
    const { q, n, resolvent, drive, scratch } = this
    const { A, B, C, D } = this.lifted as LiftedPlant
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        resolvent.re[i * n + j] = -A[i * n + j]
        resolvent.im[i * n + j] = 0
      }
      resolvent.re[i * n + i] += re
      resolvent.im[i * n + i] += im
    }
    drive.re.set(B)
    drive.im.fill(0)
    solveComplex(resolvent, drive, q, this.det)
    const cr = this.det.re
    const ci = this.det.im
    for (let a = 0; a < q; a++) {
      for (let b = 0; b < q; b++) {
        let sr = D[a * q + b]
        let si = 0
        for (let i = 0; i < n; i++) {
          sr += C[a * n + i] * drive.re[i * q + b]
          si += C[a * n + i] * drive.im[i * q + b]
        }
        const at = 2 * (a * q + b)
        scratch[at] = sr * cr - si * ci
        scratch[at + 1] = sr * ci + si * cr
      }
    }
    this.constantsAt(re, im, this.constants, 0)
    this.determinant(scratch, 0, cr, ci, this.constants, 0)
    out.re = this.det.re
    out.im = this.det.im
  }

  /**
   * λ^W·(λ − 1)^integrators·det(χI + K·N)/χ^(q−1) into `det`: K are the laws and the window, N = χ·P; `constants` from `constantsAt`.
   *
   * Row k (1…q) of K·N is i_ref's law at tick k; tick q is tick 0 of the next hyperperiod, hence the division by λ.
   */
  private determinant(N: Float64Array, from: number, chiRe: number, chiIm: number, constants: Float64Array, at0: number): void {
    const { q, W, matrix, column, source, age, position, T_o } = this
    const { K_pp, K_ip, K_pv, K_iv } = this.gains as Firmware
    const ir = constants[at0]
    const ii = constants[at0 + 1]
    const gr = constants[at0 + 2]
    const gi = constants[at0 + 3]
    const ages = at0 + 6
    const toSpeed = 1 / (W * T_o)
    const kp = position ? K_pp : 0
    const ki = position ? K_ip * T_o : 0
    const kv = K_iv * T_o
    for (let j = 0; j < q; j++) {
      // θ_k for k = 1…q: cumulative increments from θ_0 = (their sum)/(λ − 1).
      let sr = 0
      let si = 0
      for (let k = 0; k < q; k++) {
        sr += N[from + 2 * (k * q + j)]
        si += N[from + 2 * (k * q + j) + 1]
        column[2 * k + 2] = sr
        column[2 * k + 3] = si
      }
      const tr = sr * gr - si * gi
      const ti = sr * gi + si * gr
      for (let k = 1; k <= q; k++) {
        column[2 * k] += tr
        column[2 * k + 1] += ti
      }
      // Position integrator, from its own geometric sum; then the velocity law likewise.
      let pr = 0
      let pi = 0
      if (ki !== 0) {
        let ar = 0
        let ai = 0
        for (let k = 1; k <= q; k++) {
          ar += column[2 * k]
          ai += column[2 * k + 1]
        }
        pr = ki * (ar * gr - ai * gi)
        pi = ki * (ar * gi + ai * gr)
      }
      let xr = 0
      let xi = 0
      for (let k = 1; k <= q; k++) {
        const th = column[2 * k]
        const ti2 = column[2 * k + 1]
        const o = source[k]
        const a = ages + 2 * age[k]
        const wr = column[2 * o] * constants[a] - column[2 * o + 1] * constants[a + 1]
        const wi = column[2 * o] * constants[a + 1] + column[2 * o + 1] * constants[a]
        let er = (th - wr) * toSpeed + kp * th
        let ei = (ti2 - wi) * toSpeed + kp * ti2
        if (ki !== 0) {
          pr += ki * th
          pi += ki * ti2
          er += pr
          ei += pi
        }
        xr += er
        xi += ei
        const at = (k === q ? 0 : k) * q + j
        matrix.re[at] = K_pv * er + kv * xr
        matrix.im[at] = K_pv * ei + kv * xi
      }
      if (kv !== 0) {
        const vr = kv * (xr * gr - xi * gi)
        const vi = kv * (xr * gi + xi * gr)
        for (let k = 0; k < q; k++) {
          matrix.re[k * q + j] += vr
          matrix.im[k * q + j] += vi
        }
      }
    }
    for (let j = 0; j < q; j++) {
      const re = matrix.re[j]
      const im = matrix.im[j]
      matrix.re[j] = re * ir - im * ii
      matrix.im[j] = re * ii + im * ir
    }
    for (let k = 0; k < q; k++) {
      matrix.re[k * q + k] += chiRe
      matrix.im[k * q + k] += chiIm
    }
    solveComplex(matrix, null, 0, this.det)
    const fr = constants[at0 + 4]
    const fi = constants[at0 + 5]
    let dr = this.det.re * fr - this.det.im * fi
    let di = this.det.re * fi + this.det.im * fr
    let t: number
    const csize = 1 / (chiRe * chiRe + chiIm * chiIm)
    for (let k = 1; k < q; k++) {
      t = (dr * chiRe + di * chiIm) * csize
      di = (di * chiRe - dr * chiIm) * csize
      dr = t
    }
    this.det.re = dr
    this.det.im = di
  }

  private constantsAt(re: number, im: number, out: Float64Array, at: number): void {
    const size = 1 / (re * re + im * im)
    const ir = re * size
    const ii = -im * size
    const mr = re - 1
    const msize = 1 / (mr * mr + im * im)
    out[at] = ir
    out[at + 1] = ii
    out[at + 2] = mr * msize
    out[at + 3] = -im * msize
    let fr = 1
    let fi = 0
    let br = re
    let bi = im
    for (let left = this.W; left > 0; left >>= 1) {
      if (left & 1) {
        const t = fr * br - fi * bi
        fi = fr * bi + fi * br
        fr = t
      }
      const t = br * br - bi * bi
      bi = 2 * br * bi
      br = t
    }
    for (let k = 0; k < this.integrators; k++) {
      const t = fr * mr - fi * im
      fi = fr * im + fi * mr
      fr = t
    }
    out[at + 4] = fr
    out[at + 5] = fi
    let pr = 1
    let pi = 0
    for (let a = 0; a <= this.oldestAge; a++) {
      out[at + 6 + 2 * a] = pr
      out[at + 7 + 2 * a] = pi
      const t = pr * ir - pi * ii
      pi = pr * ii + pi * ir
      pr = t
    }
  }
}
