import { expm, expmWorkspace, type ExpmWorkspace } from './discretise.ts'
import { matrixPower, powerWorkspace, type PowerWorkspace } from './matrix-power.ts'
import type { ControlMode, JointModel } from './model.ts'
import { validateJointModel } from './model.ts'
import { plantMatrices, supplyFactor } from './plant.ts'
import { timingOf, type Timing } from './timing.ts'

/**
 * The closed current loop between two current ticks, and what the outer task sees of it.
 *
 * State before a tick's work: z = [plant without its free angle, encoder angle since the last outer sample, the same at past
 * ticks (sensor_delay), x_c if K_ic ≠ 0, u of past ticks (D), i_ref of past ticks (outer_delay)]. One tick: z ← F·z + G·i_ref.
 */
export interface SampledJoint {
  readonly model: JointModel
  readonly timing: Timing
  /** The mode that the gains really close: a loop with both gains zero is open, and so is all outside it. */
  readonly closes: ControlMode
  readonly gamma: number
  readonly nz: number
  readonly F: Float64Array
  readonly G: Float64Array
  /** Index of θ in z. */
  readonly theta: number
  /** States that shift with the angle's origin: θ and the θ of past ticks. */
  readonly shift: Float64Array
  /** The plant that the current loop sees, over one current tick: x ← Ad·x + Bd·v, i = x[0]; no free angle, no mechanics where k_e = 0. */
  readonly nx: number
  readonly Ad: Float64Array
  readonly Bd: Float64Array
  /** Outer sample k: row `rows[k]` over z and direct term on i_ref, taken at tick `tick[k]` (offset > 0, no sensor delay) or at the next current tick. */
  readonly rows: Float64Array
  readonly direct: Float64Array
  /** Whether sample k is read between two ticks, from the state at the earlier one. */
  readonly between: Uint8Array
}

/** Which loops a joint closes once loops without gain are left out. */
export function closedMode(model: JointModel): ControlMode {
  const f = model.firmware
  const current = f.K_pc !== 0 || f.K_ic !== 0
  const velocity = current && (f.K_pv !== 0 || f.K_iv !== 0)
  const position = velocity && (f.K_pp !== 0 || f.K_ip !== 0)
  if (f.mode === 'position' && position) return 'position'
  return f.mode !== 'current' && velocity ? 'velocity' : 'current'
}

/** Powers up to this keep the exponential's accuracy. */
const POWER_LIMIT = 8

/** Matrices of one size, kept between calls: no allocation in sweeps. */
interface Scratch {
  readonly block: Float64Array
  readonly whole: Float64Array
  readonly part: Float64Array
  readonly power: PowerWorkspace
  readonly work: ExpmWorkspace
}

const scratches = new Map<number, Scratch>()
function scratchOf(size: number): Scratch {
  let scratch = scratches.get(size)
  if (!scratch) {
    const matrix = (): Float64Array => new Float64Array(size * size)
    scratch = { block: matrix(), whole: matrix(), part: matrix(), power: powerWorkspace(size), work: expmWorkspace(size) }
    scratches.set(size, scratch)
  }
  return scratch
}

/** What a sampled joint is written into. */
interface Arrays {
  readonly F: Float64Array
  readonly G: Float64Array
  readonly shift: Float64Array
  readonly Ad: Float64Array
  readonly Bd: Float64Array
  readonly rows: Float64Array
  readonly direct: Float64Array
  readonly between: Uint8Array
  // Rows over z, used while sampling.
  readonly request: Float64Array
  readonly applied: Float64Array
}

const freshArrays = (nz: number, nx: number, q: number): Arrays => ({
  F: new Float64Array(nz * nz), G: new Float64Array(nz), shift: new Float64Array(nz), Ad: new Float64Array(nx * nx), Bd: new Float64Array(nx),
  rows: new Float64Array(q * nz), direct: new Float64Array(q), between: new Uint8Array(q), request: new Float64Array(nz), applied: new Float64Array(nz),
})

/** The arrays of the last joint that was sampled to be read once. */
let passing: { readonly nz: number; readonly nx: number; readonly q: number; readonly arrays: Arrays } | null = null

function passingArrays(nz: number, nx: number, q: number): Arrays {
  if (!passing || passing.nz !== nz || passing.nx !== nx || passing.q !== q) passing = { nz, nx, q, arrays: freshArrays(nz, nx, q) }
  const { F, G, shift, rows, direct, between, request, applied } = passing.arrays
  for (const array of [F, G, shift, rows, direct, between, request, applied]) array.fill(0)
  return passing.arrays
}

/**
 * Samples a joint exactly: matrix exponentials over one current tick and over every offset at which the outer task reads θ.
 *
 * @throws NumericError from validation, timing or the exponential
 * @source control-model.md §1–§3
 */
export function sampleJoint(model: JointModel): SampledJoint {
  validateJointModel(model)
  const timing = timingOf(model.firmware.f_c, model.firmware.f_o)
  return sampleInto(model, timing, freshArrays)
}

/**
 * As sampleJoint, for a joint that is read before the next one is sampled this way: its arrays are written anew then.
 *
 * A verdict costs microseconds, and making arrays would be a third of them.
 */
export function samplePassingJoint(model: JointModel): SampledJoint {
  validateJointModel(model)
  return sampleInto(model, timingOf(model.firmware.f_c, model.firmware.f_o), passingArrays)
}

function sampleInto(model: JointModel, timing: Timing, arraysOf: (nz: number, nx: number, q: number) => Arrays): SampledJoint {
  const { plant, firmware, environment } = model
  const matrices = plantMatrices(plant, environment.T_winding)
  const { n, A, B, C_omega } = matrices
  const closes = closedMode(model)
  const size = n + 1
  const { block, whole, part: partMatrix, power, work } = scratchOf(size)
  block.fill(0)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) block[i * size + j] = A[i * n + j]
    block[i * size + n] = B[i]
  }
  // The angle kept is the one that the encoder reads, so that it is exactly 0 right after an outer sample.
  for (let j = 0; j < n; j++) block[(n - 1) * size + j] = C_omega[j]
  const s = firmware.sensor_delay ?? 0
  // The step over a whole current period is the q-th power of the part between offsets where both are needed and q is small.
  const part = s === 0 && timing.q > 1 ? expm(block, size, timing.T_c / timing.q, partMatrix, work) : null
  const step = part && timing.q <= POWER_LIMIT ? matrixPower(part, size, timing.q, whole, power) : expm(block, size, timing.T_c, whole, work)
  const so = firmware.outer_delay ?? 0
  const integrates = firmware.K_ic !== 0
  const { D } = firmware
  const theta = n - 1
  const fifo = n
  const xc = fifo + s
  const u = xc + (integrates ? 1 : 0)
  const r = u + D
  const nz = r + so
  const gamma = supplyFactor(plant, firmware, environment)
  const K = firmware.K_pc + firmware.K_ic * timing.T_c
  // Without back-EMF the current loop does not see the mechanics: they are no states of it.
  const nx = plant.k_e === 0 ? 1 : n - 1
  const { F, G, shift, Ad, Bd, rows, direct, between, request, applied } = arraysOf(nz, nx, timing.q)
  // The request u = K·(i_ref − i) + x_c, as a row over z and a factor on i_ref (or on the oldest held i_ref).
  request[0] = -K
  if (integrates) request[xc] = 1
  let requestOfInput = 0
  if (so > 0) request[nz - 1] = K
  else requestOfInput = K
  let appliedOfInput = 0
  if (D === 0) {
    for (let j = 0; j < nz; j++) applied[j] = gamma * request[j]
    appliedOfInput = gamma * requestOfInput
  } else {
    applied[u + D - 1] = gamma
  }
  for (let i = 0; i < n; i++) {
    const b = step[i * size + n]
    for (let j = 0; j < n; j++) F[i * nz + j] = step[i * size + j]
    for (let j = 0; j < nz; j++) F[i * nz + j] += b * applied[j]
    G[i] = b * appliedOfInput
  }
  for (let j = 0; j < s; j++) {
    const row = (fifo + j) * nz
    if (j === 0) F[row + theta] = 1
    else F[row + fifo + j - 1] = 1
  }
  if (integrates) {
    const gain = firmware.K_ic * timing.T_c
    F[xc * nz + xc] = 1
    F[xc * nz] = -gain
    if (so > 0) F[xc * nz + nz - 1] = gain
    else G[xc] = gain
  }
  if (D > 0) {
    for (let j = 0; j < nz; j++) F[u * nz + j] = request[j]
    G[u] = requestOfInput
    for (let j = 1; j < D; j++) F[(u + j) * nz + u + j - 1] = 1
  }
  if (so > 0) {
    G[r] = 1
    for (let j = 1; j < so; j++) F[(r + j) * nz + r + j - 1] = 1
  }
  for (let j = theta; j < xc; j++) shift[j] = 1

  const { q, offset } = timing
  const offsetRows = part ? rowsAtOffsets(part, size, q) : null
  for (let k = 0; k < q; k++) {
    const row = k * nz
    if (s > 0) {
      rows[row + fifo + s - 1] = 1
    } else if (offset[k] === 0 || !offsetRows) {
      rows[row + theta] = 1
    } else {
      between[k] = 1
      const from = offset[k] * size
      const onVoltage = offsetRows[from + n]
      for (let c = 0; c < n; c++) rows[row + c] = offsetRows[from + c]
      for (let j = 0; j < nz; j++) rows[row + j] += onVoltage * applied[j]
      direct[k] = onVoltage * appliedOfInput
    }
  }
  for (let i = 0; i < nx; i++) {
    for (let j = 0; j < nx; j++) Ad[i * nx + j] = step[i * size + j]
    Bd[i] = step[i * size + n]
  }
  return { model, timing, closes, gamma, nz, F, G, theta, shift, nx, Ad, Bd, rows, direct, between }
}

/** The angle's row of e^{A·m·T_c/q}, m = 0…q−1, over the plant's states and the voltage, by products. */
function rowsAtOffsets(part: Float64Array, size: number, q: number): Float64Array {
  const rows = new Float64Array(q * size)
  rows[size - 2] = 1
  for (let m = 1; m < q; m++) {
    for (let j = 0; j < size; j++) {
      let sum = 0
      for (let k = 0; k < size; k++) sum += rows[(m - 1) * size + k] * part[k * size + j]
      rows[m * size + j] = sum
    }
  }
  return rows
}
