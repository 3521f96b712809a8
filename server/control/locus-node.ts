/** The eigenvalues of a loop's lifted transfer at one frequency ψ (radians per period), in the order of their loci. */
export interface LocusNode {
  readonly psi: number
  readonly q: number
  /** λ_i at at + 2i (real part) and at + 2i + 1; many nodes share one array, for allocation costs more than what is stored. */
  readonly values: Float64Array
  readonly at: number
}

export const reOf = (node: LocusNode, i: number): number => node.values[node.at + 2 * i]
export const imOf = (node: LocusNode, i: number): number => node.values[node.at + 2 * i + 1]

const NODES_IN_A_SLAB = 64

/** Makes nodes of q loci. */
export class NodeMaker {
  private readonly q: number
  private slab = new Float64Array(0)
  private used = 0

  constructor(q: number) {
    this.q = q
  }

  make(psi: number, re: Float64Array, im: Float64Array): LocusNode {
    const { q } = this
    if (this.used + 2 * q > this.slab.length) {
      this.slab = new Float64Array(2 * q * NODES_IN_A_SLAB)
      this.used = 0
    }
    const values = this.slab
    const at = this.used
    for (let i = 0; i < q; i++) {
      values[at + 2 * i] = re[i]
      values[at + 2 * i + 1] = im[i]
    }
    this.used += 2 * q
    return { psi, q, values, at }
  }
}
