/** What a bounded test can say of a polynomial's roots. */
export type RootsInside = 'inside' | 'not-inside' | 'undecided'

/**
 * Whether every root of a real polynomial lies strictly inside the unit circle (Schur and Cohn's reduction).
 *
 * Each reduction divides by the leading coefficient that the last has left. Its rounding error is followed, and a reflection
 * coefficient nearer to ±1 than that error decides nothing.
 *
 * @param a       coefficients, a[k] of z^k; spoilt
 * @param spare   another array of at least degree + 1
 * @param noise   error of the coefficients relative to the largest, at least 1e-15
 * @source        I. Schur 1917, A. Cohn 1922, from memory
 */
export function rootsInside(a: Float64Array, spare: Float64Array, degree: number, noise: number): RootsInside {
  let size = 0
  for (let k = 0; k <= degree; k++) {
    const s = Math.abs(a[k])
    if (s > size) size = s
  }
  let from = a
  let to = spare
  const floor = 4 * noise * size
  for (let m = degree; m > 0; m--) {
    const lead = from[m]
    const kappa = from[0] / lead
    const error = floor / Math.abs(lead)
    const modulus = Math.abs(kappa)
    if (!(error < 0.25)) return 'undecided'
    if (modulus >= 1 + error) return 'not-inside'
    if (modulus > 1 - error) return 'undecided'
    for (let k = 0; k < m; k++) to[k] = from[k + 1] - kappa * from[m - 1 - k]
    const t = from
    from = to
    to = t
  }
  return 'inside'
}
