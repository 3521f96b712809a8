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
}

/** Loci below this modulus, or above its inverse, cross nothing within ±60 dB. */
const NEGLIGIBLE = 5e-4
/** How far a locus may stray, in ln and rad, from a straight line between nodes. */
const STRAY = 0.02
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
  const starts = startingFrequencies(source, make)
  const nodes: LocusNode[] = [starts[0]]
  const permutation = new Int32Array(source.q)
  const taken = new Uint8Array(source.q)
  let count = starts.length
  const pending: LocusNode[] = []
  for (let s = 1; s < starts.length; s++) {
    pending.push(starts[s])
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

/** Half decades, from where all loci are beyond 60 dB or the lowest frequency is reached; then landmarks and eighths of decades. */
function startingFrequencies(source: LocusSource, make: (psi: number) => LocusNode): LocusNode[] {
  const low: LocusNode[] = []
  let psi = 0.01
  let previous: LocusNode | null = null
  while (psi >= PSI_LOWEST) {
    const node = make(psi)
    low.unshift(node)
    if (previous && allRisen(previous, node)) break
    previous = node
    psi /= Math.sqrt(10)
  }
  const grid = new Set<number>([Math.PI])
  for (let k = 1; k < 20; k++) grid.add(0.01 * 10 ** (k / 8))
  for (const at of source.landmarks) if (at > low[0].psi && at < Math.PI) grid.add(at)
  const rest = [...grid].filter((x) => x <= Math.PI && !low.some((node) => node.psi === x)).map(make)
  return [...low, ...rest].sort((a, b) => a.psi - b.psi)
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

/** The right node with its eigenvalues put in the left node's order: nearest relative distance first. */
export function ordered(left: LocusNode, right: LocusNode, permutation: Int32Array, taken: Uint8Array): LocusNode {
  const q = left.re.length
  if (q === 1) return right
  taken.fill(0)
  permutation.fill(-1)
  for (let round = 0; round < q; round++) {
    let best = Infinity
    let from = -1
    let to = -1
    for (let i = 0; i < q; i++) {
      if (permutation[i] >= 0) continue
      for (let k = 0; k < q; k++) {
        if (taken[k]) continue
        const dr = left.re[i] - right.re[k]
        const di = left.im[i] - right.im[k]
        const size = left.re[i] ** 2 + left.im[i] ** 2 + right.re[k] ** 2 + right.im[k] ** 2
        const distance = size === 0 ? 0 : (dr * dr + di * di) / size
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
  const node = { psi: right.psi, re: new Float64Array(q), im: new Float64Array(q) }
  for (let i = 0; i < q; i++) {
    node.re[i] = right.re[permutation[i]]
    node.im[i] = right.im[permutation[i]]
  }
  return node
}

function straight(a: LocusNode, m: LocusNode, b: LocusNode): boolean {
  for (let i = 0; i < a.re.length; i++) {
    const ma = Math.hypot(a.re[i], a.im[i])
    const mm = Math.hypot(m.re[i], m.im[i])
    const mb = Math.hypot(b.re[i], b.im[i])
    if (ma < NEGLIGIBLE && mm < NEGLIGIBLE && mb < NEGLIGIBLE) continue
    if (ma > 1 / NEGLIGIBLE && mm > 1 / NEGLIGIBLE && mb > 1 / NEGLIGIBLE) continue
    if (ma === 0 || mm === 0 || mb === 0) return false
    const la = Math.log(ma)
    const lm = Math.log(mm)
    const lb = Math.log(mb)
    const first = turn(a.re[i], a.im[i], m.re[i], m.im[i])
    const second = turn(m.re[i], m.im[i], b.re[i], b.im[i])
    if (Math.abs(first) > 0.9 || Math.abs(second) > 0.9 || Math.abs(lm - la) > 3 || Math.abs(lb - lm) > 3) return false
    const strayModulus = Math.abs(lm - 0.5 * (la + lb))
    const strayPhase = 0.5 * Math.abs(first - second)
    if (strayModulus > STRAY || strayPhase > STRAY) return false
    if (strayModulus > STRAY_GRAZING && grazes(la, lm, lb, strayModulus)) return false
    if (strayPhase > STRAY_GRAZING) {
      const pa = fromMinusOne(a.re[i], a.im[i])
      const pm = fromMinusOne(m.re[i], m.im[i])
      const pb = fromMinusOne(b.re[i], b.im[i])
      if (Math.abs(pm) < 2 && grazes(pa, pm, pb, strayPhase)) return false
    }
  }
  return true
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
