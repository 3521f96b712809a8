/** Where a polynomial that begins at or above zero first falls below it. */

/** Σ γ[k]·t^k. */
export function valueAt(gamma: Float64Array, degree: number, t: number): number {
  let sum = gamma[degree]
  for (let k = degree - 1; k >= 0; k--) sum = sum * t + gamma[k]
  return sum
}

/** Derivative of Σ γ[k]·t^k. */
export function slopeAt(gamma: Float64Array, degree: number, t: number): number {
  let sum = degree * gamma[degree]
  for (let k = degree - 1; k >= 1; k--) sum = sum * t + k * gamma[k]
  return sum
}

/**
 * First t in (0, h] at which γ crosses from above to below zero; −1 when it stays above.
 *
 * Meant for Taylor polynomials over an interval in which the system moves gently (‖A‖·h ≤ 1): at most one dip and
 * one hump. A start within `tolerance` of zero counts as zero, a dip shallower than that as none.
 */
export function firstExit(gamma: Float64Array, degree: number, h: number, tolerance: number): number {
  const end = valueAt(gamma, degree, h)
  const startSlope = gamma[1]
  if (end >= 0) {
    const endSlope = slopeAt(gamma, degree, h)
    if (!(startSlope < 0 && endSlope > 0)) return -1
    const lowest = turningPoint(gamma, degree, 0, h)
    if (valueAt(gamma, degree, lowest) >= -tolerance) return -1
    return gamma[0] > tolerance ? crossing(gamma, degree, 0, lowest) : lowest
  }
  if (gamma[0] > tolerance) return crossing(gamma, degree, 0, h)
  // Starts on zero and ends below: either it leaves at once, or over a hump.
  for (let k = 1; k < 16; k++) {
    const t = (h * k) / 16
    if (valueAt(gamma, degree, t) > tolerance) return crossing(gamma, degree, t, h)
  }
  return end < -tolerance ? Math.max(h / 16, Number.MIN_VALUE) : h
}

/** Zero of the slope between `a` (falling) and `b` (rising). */
function turningPoint(gamma: Float64Array, degree: number, a: number, b: number): number {
  for (let k = 0; k < 60 && b - a > 1e-12 * b; k++) {
    const middle = (a + b) / 2
    if (slopeAt(gamma, degree, middle) < 0) a = middle
    else b = middle
  }
  return (a + b) / 2
}

/** Zero between `a` (above) and `b` (below): regula falsi with halved weights, bisection when it stalls. */
function crossing(gamma: Float64Array, degree: number, a: number, b: number): number {
  let fa = valueAt(gamma, degree, a)
  let fb = valueAt(gamma, degree, b)
  const width = 1e-15 * b
  for (let k = 0; k < 100 && b - a > width; k++) {
    let t = k % 8 === 7 ? (a + b) / 2 : a + ((b - a) * fa) / (fa - fb)
    if (!(t > a && t < b)) t = (a + b) / 2
    if (!(t > a && t < b)) break
    const f = valueAt(gamma, degree, t)
    if (f === 0) return t
    if (f > 0) {
      a = t
      fa = f
      fb /= 2
    } else {
      b = t
      fb = f
      fa /= 2
    }
  }
  return b
}
