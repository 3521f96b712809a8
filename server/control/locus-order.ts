import { imOf, reOf, type LocusNode } from './locus-node.ts'

/** Up to this many loci the nearest pair of all is matched first; beyond, each locus in turn from the largest on. */
const PAIRWISE_LIMIT = 12

/** Puts a node's eigenvalues into the order of the node before it: which eigenvalue belongs to which locus. */
export class LocusOrder {
  private readonly q: number
  private readonly permutation: Int32Array
  private readonly taken: Uint8Array
  private readonly moved: Float64Array
  private readonly distances: Float64Array

  constructor(q: number) {
    this.q = q
    this.permutation = new Int32Array(q)
    this.taken = new Uint8Array(q)
    this.moved = new Float64Array(2 * q)
    this.distances = new Float64Array(q <= PAIRWISE_LIMIT ? q * q : 0)
  }

  /** Orders `right` in place after `left`, by nearest relative distance. */
  align(left: LocusNode, right: LocusNode): void {
    const { q, permutation, taken, moved } = this
    if (q === 1) return
    taken.fill(0)
    permutation.fill(-1)
    if (q <= PAIRWISE_LIMIT) this.matchNearestFirst(left, right)
    else this.matchLargestFirst(left, right)
    let same = true
    for (let i = 0; i < q && same; i++) same = permutation[i] === i
    if (same) return
    for (let i = 0; i < q; i++) {
      moved[2 * i] = reOf(right, permutation[i])
      moved[2 * i + 1] = imOf(right, permutation[i])
    }
    for (let k = 0; k < 2 * q; k++) right.values[right.at + k] = moved[k]
  }

  private matchNearestFirst(left: LocusNode, right: LocusNode): void {
    const { q, permutation, taken, distances } = this
    for (let i = 0; i < q; i++) for (let k = 0; k < q; k++) distances[i * q + k] = relativeDistance(left, i, right, k)
    for (let round = 0; round < q; round++) {
      let best = Infinity
      let from = -1
      let to = -1
      for (let i = 0; i < q; i++) {
        if (permutation[i] >= 0) continue
        for (let k = 0; k < q; k++) {
          if (taken[k] === 0 && distances[i * q + k] < best) {
            best = distances[i * q + k]
            from = i
            to = k
          }
        }
      }
      permutation[from] = to
      taken[to] = 1
    }
  }

  private matchLargestFirst(left: LocusNode, right: LocusNode): void {
    const { q, permutation, taken } = this
    const order = Array.from({ length: q }, (_, i) => i).sort((a, b) => Math.hypot(reOf(left, b), imOf(left, b)) - Math.hypot(reOf(left, a), imOf(left, a)))
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
}

function relativeDistance(left: LocusNode, i: number, right: LocusNode, k: number): number {
  const ar = reOf(left, i)
  const ai = imOf(left, i)
  const br = reOf(right, k)
  const bi = imOf(right, k)
  const size = ar * ar + ai * ai + br * br + bi * bi
  return size === 0 ? 0 : ((ar - br) * (ar - br) + (ai - bi) * (ai - bi)) / size
}
