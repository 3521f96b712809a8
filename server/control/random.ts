/** Repeatable random numbers in [0, 1) from a seed: xorshift-multiply on 32 bits (mulberry32, from memory). */
export function seededRandom(seed: number): () => number {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6d2b79f5) >>> 0
    let t = state
    t = Math.imul(t ^ (t >>> 15), t | 1)
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61)
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
}

/**
 * Latin hypercube in the unit cube: each of `count` equal slices of every axis holds exactly one sample.
 *
 * @returns count × dimensions, row by row
 * @source  McKay, Beckman, Conover, Technometrics 21 (1979), from memory
 */
export function latinHypercube(count: number, dimensions: number, seed: number): Float64Array {
  const random = seededRandom(seed)
  const out = new Float64Array(count * dimensions)
  const order = new Int32Array(count)
  for (let d = 0; d < dimensions; d++) {
    for (let k = 0; k < count; k++) order[k] = k
    for (let k = count - 1; k > 0; k--) {
      const other = Math.floor(random() * (k + 1))
      const t = order[k]
      order[k] = order[other]
      order[other] = t
    }
    for (let k = 0; k < count; k++) out[k * dimensions + d] = (order[k] + random()) / count
  }
  return out
}
