import { NumericError } from './errors.ts'
import { imOf, NodeMaker, reOf, type LocusNode } from './locus-node.ts'
import { LocusOrder } from './locus-order.ts'
import { NEGLIGIBLE, straight } from './locus-straightness.ts'

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

/** Who looks on while loci are traced, from low frequency to high. */
export interface LocusWatch {
  /** Modulus below which loci are of no more interest, at least NEGLIGIBLE; it may rise as the trace goes on. */
  readonly floor: number
  /** Told of each settled interval; true ends the trace there. */
  enough(left: LocusNode, right: LocusNode): boolean
}

const PSI_LOWEST = 1e-10
const NODES_LIMIT = 20000

/**
 * Samples the loci over (0, π] until straight lines in ln λ describe them, landmarks included.
 *
 * Goes down in frequency until every locus is beyond ±60 dB or 1e-10 is reached. Every interval has been tested at its
 * middle; where a locus comes within its own uncertainty of the unit circle or the negative real axis without crossing, the
 * interval is refined until the uncertainty is gone.
 *
 * @param watch  told of each settled interval
 * @throws NumericError no-convergence when 20 000 nodes do not suffice
 */
export function traceLoci(source: LocusSource, watch: LocusWatch = { floor: NEGLIGIBLE, enough: () => false }): LocusNode[] {
  const { q } = source
  const maker = new NodeMaker(q)
  const order = new LocusOrder(q)
  const re = new Float64Array(q)
  const im = new Float64Array(q)
  const make = (psi: number): LocusNode => {
    source.evaluate(psi, re, im)
    return maker.make(psi, re, im)
  }
  const low = lowFrequencies(source, make)
  const rest = higherFrequencies(source, low[0].psi, low[low.length - 1].psi)
  const nodes: LocusNode[] = [low[0]]
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
        order.align(left, right)
        nodes.push(right)
        if (watch.enough(left, right)) return nodes
        continue
      }
      const middle = make(right.psi > 2 * left.psi ? Math.sqrt(left.psi * right.psi) : 0.5 * (left.psi + right.psi))
      if (++count > NODES_LIMIT) {
        throw new NumericError('no-convergence', { limit: NODES_LIMIT, text: `A loop's loci did not settle in ${NODES_LIMIT} frequencies; its margins were not computed.` })
      }
      order.align(left, middle)
      order.align(middle, right)
      if (straight(left, middle, right, watch.floor)) {
        pending.pop()
        nodes.push(middle, right)
        if (watch.enough(left, middle) || watch.enough(middle, right)) return nodes
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

/** Eighths of decades above 0.01, to π. */
const GRID = [...Array.from({ length: 19 }, (_, k) => 0.01 * 10 ** ((k + 1) / 8)), Math.PI]

/** The grid and the landmarks, in order. */
function higherFrequencies(source: LocusSource, lowest: number, above: number): number[] {
  const marks = source.landmarks.filter((at) => at > Math.max(lowest, above) && at < Math.PI)
  const sorted = [...GRID, ...marks].sort((a, b) => a - b)
  // The same frequency computed two ways differs in its last bits.
  return sorted.filter((at, k) => k === sorted.length - 1 || sorted[k + 1] - at > 1e-9 * at)
}

/** Whether a locus has passed +60 dB on the way down and still rises like an integrator. */
function allRisen(above: LocusNode, below: LocusNode): boolean {
  const high = largest(below)
  return high > 1 / NEGLIGIBLE && high > 2.8 * largest(above)
}

function largest(node: LocusNode): number {
  let most = 0
  for (let i = 0; i < node.q; i++) most = Math.max(most, reOf(node, i) * reOf(node, i) + imOf(node, i) * imOf(node, i))
  return Math.sqrt(most)
}
