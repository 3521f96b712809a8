import { NumericError } from './errors.ts'

/** The eigenvalues of a loop's lifted transfer at one frequency ψ (radians per period), in the order of their loci. */
export interface LocusNode {
  readonly psi: number
  readonly re: Float64Array
  readonly im: Float64Array
}

/** What a tracer needs of a loop: how many loci, and where they are at ψ. */
export interface LocusSource {
  readonly q: number
  evaluate(psi: number, re: Float64Array, im: Float64Array): void
  /** Frequencies in (0, π] where something narrow may sit: resonances, lobes of the window. */
  readonly landmarks: readonly number[]
  /** Whether nothing new follows below these two frequencies (upper, lower). */
  isLow?(above: LocusNode, below: LocusNode): boolean
}

/** A loop whose loci can be traced and whose strongest frequency and lifted sensitivity can be asked for. */
export interface MarginSource extends LocusSource {
  /** Ticks of the loop's own task in a period ψ: ψ = q·ω·period. */
  readonly period: number
  /** Signed true frequency, radians per own tick within ±π, of the strongest component of the locus λ at ψ. */
  strongest(psi: number, re: number, im: number): number
  /** Largest singular value of (I + L)⁻¹ at ψ, or 0 when its bound shows it to be at most `floor`. */
  sensitivityNorm(psi: number, floor: number): number
  /** One locus at ψ, near a guess, cheaper than all of them; null where it is not found. */
  follow?(psi: number, re: number, im: number): { readonly re: number; readonly im: number } | null
}

/** Loci below this modulus, or above its inverse, cross nothing within ±60 dB. */
const NEGLIGIBLE = 5e-4
/** How far a locus may stray, in ln and rad (or relative to its size), from a straight line between nodes. */
const STRAY = 0.05
/** The same where it passes a threshold so closely that a crossing pair may hide between two nodes. */
const STRAY_GRAZING = 2e-5
const PSI_LOWEST = 1e-10
const NODES_LIMIT = 20000

/**
 * Samples the loci over (0, π] until straight lines in ln λ describe them, landmarks included.
 *
 * Goes down in frequency until every locus is beyond ±60 dB or 1e-10 is reached. Every interval has been tested at its
 * middle; where a locus comes within its own uncertainty of the unit circle or the negative real axis without crossing, the
 * interval is refined until the uncertainty is gone.
 *
 * @param enough  asked after each settled interval, from low frequency to high; true ends the trace there
 * @throws NumericError no-convergence when 20 000 nodes do not suffice
 */
export function traceLoci(source: LocusSource, enough: (left: LocusNode, right: LocusNode) => boolean = () => false): LocusNode[] {
  const make = (psi: number): LocusNode => {
    const node = { psi, re: new Float64Array(source.q), im: new Float64Array(source.q) }
    source.evaluate(psi, node.re, node.im)
    return node
  }
  const low = lowFrequencies(source, make)
  const rest = higherFrequencies(source, low[0].psi, low[low.length - 1].psi)
  const nodes: LocusNode[] = [low[0]]
  const permutation = new Int32Array(source.q)
  const taken = new Uint8Array(source.q)
  let count = low.length
  const pending: LocusNode[] = []
  for (let s = 1; s < low.length + rest.length; s++) {
    pending.push(s < low.length ? low[s] : make(rest[s - low.length]))
    count++
    // Depth first, left to right: the last node kept is always the left end, its order settled.
    while (pending.length > 0) {
      const left = nodes[nodes.length - 1]
      const right = pending[pending.length - 1]
      if (right.psi - left.psi <= 1e-9 * right.psi) {
        pending.pop()
        nodes.push(ordered(left, right, permutation, taken))
        if (enough(left, nodes[nodes.length - 1])) return nodes
        continue
      }
      const middle = make(right.psi > 2 * left.psi ? Math.sqrt(left.psi * right.psi) : 0.5 * (left.psi + right.psi))
      if (++count > NODES_LIMIT) {
        throw new NumericError('no-convergence', { limit: NODES_LIMIT, text: `A loop's loci did not settle in ${NODES_LIMIT} frequencies; its margins were not computed.` })
      }
      const inOrder = ordered(left, middle, permutation, taken)
      const rightInOrder = ordered(inOrder, right, permutation, taken)
      if (straight(left, inOrder, rightInOrder)) {
        pending.pop()
        nodes.push(inOrder, rightInOrder)
        if (enough(left, inOrder) || enough(inOrder, rightInOrder)) return nodes
      } else {
        pending.push(middle)
      }
    }
  }
  return nodes
}

/** Half decades from 0.01 down to where all loci are beyond 60 dB, or the source says that nothing follows, or the lowest frequency. */
function lowFrequencies(source: LocusSource, make: (psi: number) => LocusNode): LocusNode[] {
  const low: LocusNode[] = []
  let previous: LocusNode | null = null
  for (let psi = 0.01; psi >= PSI_LOWEST; psi /= Math.sqrt(10)) {
    const node = make(psi)
    low.unshift(node)
    if (previous && (allRisen(previous, node) || source.isLow?.(previous, node))) break
    previous = node
  }
  return low
}

/** Eighths of decades to π, and the landmarks. */
function higherFrequencies(source: LocusSource, lowest: number, above: number): number[] {
  const grid = new Set<number>([Math.PI])
  for (let k = 1; k < 20; k++) grid.add(0.01 * 10 ** (k / 8))
  for (const at of source.landmarks) if (at > Math.max(lowest, above) && at < Math.PI) grid.add(at)
  return [...grid].sort((a, b) => a - b)
}

/** Whether a locus has passed +60 dB on the way down and still rises like an integrator. */
function allRisen(above: LocusNode, below: LocusNode): boolean {
  const high = largest(below)
  return high > 1 / NEGLIGIBLE && high > 2.8 * largest(above)
}

function largest(node: LocusNode): number {
  let most = 0
  for (let i = 0; i < node.re.length; i++) most = Math.max(most, Math.hypot(node.re[i], node.im[i]))
  return most
}

/** Up to this many loci the nearest pair of all is matched first; beyond, each locus in turn from the largest on. */
const PAIRWISE_LIMIT = 12

/** The right node with its eigenvalues put in the left node's order, by nearest relative distance. */
export function ordered(left: LocusNode, right: LocusNode, permutation: Int32Array, taken: Uint8Array): LocusNode {
  const q = left.re.length
  if (q === 1) return right
  taken.fill(0)
  permutation.fill(-1)
  if (q <= PAIRWISE_LIMIT) matchNearestFirst(left, right, permutation, taken)
  else matchLargestFirst(left, right, permutation, taken)
  let same = true
  for (let i = 0; i < q && same; i++) same = permutation[i] === i
  if (same) return right
  const node = { psi: right.psi, re: new Float64Array(q), im: new Float64Array(q) }
  for (let i = 0; i < q; i++) {
    node.re[i] = right.re[permutation[i]]
    node.im[i] = right.im[permutation[i]]
  }
  return node
}

function relativeDistance(left: LocusNode, i: number, right: LocusNode, k: number): number {
  const dr = left.re[i] - right.re[k]
  const di = left.im[i] - right.im[k]
  const size = left.re[i] ** 2 + left.im[i] ** 2 + right.re[k] ** 2 + right.im[k] ** 2
  return size === 0 ? 0 : (dr * dr + di * di) / size
}

function matchNearestFirst(left: LocusNode, right: LocusNode, permutation: Int32Array, taken: Uint8Array): void {
  const q = left.re.length
  for (let round = 0; round < q; round++) {
    let best = Infinity
    let from = -1
    let to = -1
    for (let i = 0; i < q; i++) {
      if (permutation[i] >= 0) continue
      for (let k = 0; k < q; k++) {
        if (taken[k]) continue
        const distance = relativeDistance(left, i, right, k)
        if (distance < best) {
          best = distance
          from = i
          to = k
        }
      }
    }
    permutation[from] = to
    taken[to] = 1
  }
}

function matchLargestFirst(left: LocusNode, right: LocusNode, permutation: Int32Array, taken: Uint8Array): void {
  const q = left.re.length
  const order = Array.from({ length: q }, (_, i) => i).sort((a, b) => Math.hypot(left.re[b], left.im[b]) - Math.hypot(left.re[a], left.im[a]))
  for (const i of order) {
    let best = Infinity
    let to = -1
    for (let k = 0; k < q; k++) {
      if (taken[k]) continue
      const distance = relativeDistance(left, i, right, k)
      if (distance < best) {
        best = distance
        to = k
      }
    }
    permutation[i] = to
    taken[to] = 1
  }
}

/** Whether every locus of interest runs straight between the ends, in ln λ or in λ itself. */
function straight(a: LocusNode, m: LocusNode, b: LocusNode): boolean {
  for (let i = 0; i < a.re.length; i++) {
    const sa = a.re[i] * a.re[i] + a.im[i] * a.im[i]
    const sm = m.re[i] * m.re[i] + m.im[i] * m.im[i]
    const sb = b.re[i] * b.re[i] + b.im[i] * b.im[i]
    const small = NEGLIGIBLE * NEGLIGIBLE
    if (sa < small && sm < small && sb < small) continue
    if (sa * small > 1 && sm * small > 1 && sb * small > 1) continue
    if (!straightInLog(a, m, b, i, sa, sm, sb) && !straightInPlane(a, m, b, i, sa, sm, sb)) return false
  }
  return true
}

function straightInLog(a: LocusNode, m: LocusNode, b: LocusNode, i: number, sa: number, sm: number, sb: number): boolean {
  if (sa === 0 || sm === 0 || sb === 0) return false
  const first = turn(a.re[i], a.im[i], m.re[i], m.im[i])
  const second = turn(m.re[i], m.im[i], b.re[i], b.im[i])
  if (Math.abs(first) > 0.9 || Math.abs(second) > 0.9) return false
  const strayPhase = 0.5 * Math.abs(first - second)
  if (strayPhase > STRAY) return false
  const la = 0.5 * Math.log(sa)
  const lm = 0.5 * Math.log(sm)
  const lb = 0.5 * Math.log(sb)
  const strayModulus = Math.abs(lm - 0.5 * (la + lb))
  if (strayModulus > STRAY || Math.abs(lm - la) > 3 || Math.abs(lb - lm) > 3) return false
  if (strayModulus > STRAY_GRAZING && grazes(la, lm, lb, strayModulus)) return false
  if (strayPhase <= STRAY_GRAZING) return true
  const pm = fromMinusOne(m.re[i], m.im[i])
  return Math.abs(pm) > 2 || !grazes(pm - first, pm, pm + second, strayPhase)
}

/** For loci inside the unit circle that run through or beside 0, where the logarithm is of no use: window zeros. */
function straightInPlane(a: LocusNode, m: LocusNode, b: LocusNode, i: number, sa: number, sm: number, sb: number): boolean {
  const most = Math.max(sa, sm, sb)
  if (most > 0.25) return false
  const size = Math.sqrt(most)
  const stray = Math.hypot(m.re[i] - 0.5 * (a.re[i] + b.re[i]), m.im[i] - 0.5 * (a.im[i] + b.im[i]))
  if (stray > STRAY * size) return false
  // Which side of 0 it passes decides a crossing of the negative axis: settled, or too small to matter.
  if (stray < 0.25 * NEGLIGIBLE) return true
  if (Math.min(toOrigin(a, m, i), toOrigin(m, b, i)) < 4 * stray) return false
  return !grazesBelow(a.im[i], m.im[i], b.im[i], stray, Math.min(a.re[i], m.re[i], b.re[i]))
}

function grazesBelow(a: number, m: number, b: number, stray: number, leftmost: number): boolean {
  return leftmost < 0 && grazes(a, m, b, stray)
}

/** Distance of 0 from the chord between two nodes of a locus. */
function toOrigin(a: LocusNode, b: LocusNode, i: number): number {
  const dr = b.re[i] - a.re[i]
  const di = b.im[i] - a.im[i]
  const length = dr * dr + di * di
  const t = length === 0 ? 0 : Math.min(1, Math.max(0, -(a.re[i] * dr + a.im[i] * di) / length))
  return Math.hypot(a.re[i] + t * dr, a.im[i] + t * di)
}

/** All three on one side of 0, and one nearer to it than the line may be off. */
function grazes(a: number, m: number, b: number, stray: number): boolean {
  if (a > 0 !== m > 0 || m > 0 !== b > 0) return false
  return Math.min(Math.abs(a), Math.abs(m), Math.abs(b)) < 4 * stray
}

/** Angle from x to y, in (−π, π]. */
function turn(xr: number, xi: number, yr: number, yi: number): number {
  return Math.atan2(xr * yi - xi * yr, xr * yr + xi * yi)
}

/** Angle of λ measured from −1, in (−π, π]. */
export function fromMinusOne(re: number, im: number): number {
  return Math.atan2(-im, -re)
}
