import { rootsInside } from './schur-cohn.ts'

/** Scratch for polynomials up to one degree. */
export interface RootWorkspace {
  readonly scaled: Float64Array
  readonly deflated: Float64Array
  readonly spare: Float64Array
  readonly steps: Float64Array
  /** p and p′ at the last point of Newton's iteration. */
  readonly value: { re: number; im: number; slopeRe: number; slopeIm: number }
  readonly step: { re: number; im: number }
  /** Roots expected to be small: the delays of the window. */
  small: number
  /** The root found. */
  readonly root: { re: number; im: number }
}

export function rootWorkspace(degree: number): RootWorkspace {
  return {
    scaled: new Float64Array(degree + 1),
    deflated: new Float64Array(degree + 1),
    spare: new Float64Array(degree + 1),
    steps: new Float64Array(ANGLES + 1),
    value: { re: 0, im: 0, slopeRe: 0, slopeIm: 0 },
    step: { re: 0, im: 0 },
    small: 0,
    root: { re: 0, im: 0 },
  }
}

const NEWTON_STEPS = 40
const SHELL = 1.02
const ANGLES = 64
const STARTS = 6

/**
 * Root of largest modulus of a real monic polynomial, with proof that no other is larger.
 *
 * Newton's iteration from the guess, then from 1 and beside it; the root (or pair) is divided out and Schur and Cohn's test must find
 * all others inside its circle. Failing that, the test itself locates the circle by bisection and the iteration starts on it.
 *
 * @param c       coefficients, c[degree] = 1
 * @param noise   their error relative to the largest
 * @param guess   of the root, or null
 * @param work    receives the root, its imaginary part not negative
 * @returns       false where the proof did not succeed: nothing is claimed then
 */
export function largestRoot(c: Float64Array, degree: number, noise: number, guess: { readonly re: number; readonly im: number } | null, work: RootWorkspace): boolean {
  if (guess && tryFrom(c, degree, noise, guess.re, guess.im, work)) return true
  if (tryFrom(c, degree, noise, 1, 0, work)) return true
  if (tryFrom(c, degree, noise, 1, 0.1, work)) return true
  return searchCircle(c, degree, noise, work)
}

function tryFrom(c: Float64Array, degree: number, noise: number, re: number, im: number, work: RootWorkspace): boolean {
  return newton(c, degree, re, im, work) && othersInside(c, degree, noise, work)
}

/** p and p′ by Horner's scheme. */
export function evaluatePolynomial(c: Float64Array, degree: number, re: number, im: number, value: RootWorkspace['value']): void {
  let pr = c[degree]
  let pi = 0
  let dr = 0
  let di = 0
  if (im === 0) {
    for (let k = degree - 1; k >= 0; k--) {
      dr = dr * re + pr
      pr = pr * re + c[k]
    }
  } else {
    for (let k = degree - 1; k >= 0; k--) {
      const t = dr * re - di * im + pr
      di = dr * im + di * re + pi
      dr = t
      const s = pr * re - pi * im + c[k]
      pi = pr * im + pi * re
      pr = s
    }
  }
  value.re = pr
  value.im = pi
  value.slopeRe = dr
  value.slopeIm = di
}

/**
 * Newton's step for p(z)/z^few: p/(p′ − few·p/z). Many small roots (the window's) pull p's own step towards 0 and hide the large
 * ones; divided by z^few their pull is gone, and the roots are the same.
 */
function newtonStep(work: RootWorkspace, re: number, im: number): void {
  const { value, step } = work
  const z = re * re + im * im
  const few = z > 0 ? work.small / z : 0
  // few·p/z = small·p·z̄/|z|²
  const sr = value.slopeRe - few * (value.re * re + value.im * im)
  const si = value.slopeIm - few * (value.im * re - value.re * im)
  const size = sr * sr + si * si
  step.re = (value.re * sr + value.im * si) / size
  step.im = (value.im * sr - value.re * si) / size
}

function newton(c: Float64Array, degree: number, re: number, im: number, work: RootWorkspace): boolean {
  const { value, root } = work
  let last = Infinity
  for (let step = 0; step < NEWTON_STEPS; step++) {
    evaluatePolynomial(c, degree, re, im, value)
    newtonStep(work, re, im)
    const dr = work.step.re
    const di = work.step.im
    re -= dr
    im -= di
    const moved = Math.abs(dr) + Math.abs(di)
    if (!(moved < 1e100)) return false
    // Either to rounding, or steps that no longer shrink at the level of the coefficients' own error.
    if (moved <= 1e-14 * (Math.abs(re) + Math.abs(im)) || (moved < 1e-8 && moved >= 0.5 * last)) {
      root.re = re
      // A pair nearer to the axis than its error is a real root.
      root.im = Math.abs(im) < 1e-13 ? 0 : Math.abs(im)
      return true
    }
    last = moved
  }
  return false
}

/** Divides the root (or pair) out, on the scale where its modulus is 1, and tests the rest. */
function othersInside(c: Float64Array, degree: number, noise: number, work: RootWorkspace): boolean {
  const { root, scaled, deflated, spare } = work
  const r = root.im === 0 ? Math.abs(root.re) : Math.sqrt(root.re * root.re + root.im * root.im)
  if (!(r > 0)) return false
  let power = 1
  for (let k = 0; k <= degree; k++) {
    scaled[k] = c[k] * power
    power *= r
  }
  if (!(power < 1e250)) return false
  if (root.im === 0) {
    const z = root.re / r
    let carry = 0
    for (let k = degree; k > 0; k--) {
      carry = scaled[k] + z * carry
      deflated[k - 1] = carry
    }
    return degree === 1 || rootsInside(deflated, spare, degree - 1, 4 * noise) === 'inside'
  }
  const s = (-2 * root.re) / r
  let b1 = 0
  let b2 = 0
  for (let k = degree; k > 1; k--) {
    const b = scaled[k] - s * b1 - b2
    deflated[k - 2] = b
    b2 = b1
    b1 = b
  }
  return degree === 2 || rootsInside(deflated, spare, degree - 2, 4 * noise) === 'inside'
}

/** Bisects for the circle that holds the largest root, then starts Newton's iteration from where |p| is least on it. */
function searchCircle(c: Float64Array, degree: number, noise: number, work: RootWorkspace): boolean {
  const { scaled, spare, value } = work
  const all = (r: number): string => {
    let power = 1
    for (let k = 0; k <= degree; k++) {
      scaled[k] = c[k] * power
      power *= r
    }
    return power < 1e250 ? rootsInside(scaled, spare, degree, noise) : 'undecided'
  }
  let low = 0
  let high = 0
  let r = 1
  for (let step = 0; step < 40; step++) {
    const side = all(r)
    if (side === 'undecided') {
      // A root lies so near to this circle that rounding hides the side: as good a start as any.
      low = r / SHELL
      high = r * SHELL
      break
    }
    if (side === 'inside') high = r
    else low = r
    if (low > 0 && high > 0) {
      if (high <= low * SHELL) break
      r = Math.sqrt(low * high)
    } else {
      r = low > 0 ? r * 2 : r * 0.7
    }
  }
  if (!(low > 0 && high > 0)) return false
  const at = Math.sqrt(low * high)
  // Newton's step from a point is about its distance from the nearest root: starts on the circle, shortest step first.
  const { steps } = work
  for (let k = 0; k <= ANGLES; k++) {
    const angle = (Math.PI * k) / ANGLES
    const re = at * Math.cos(angle)
    const im = k === ANGLES || k === 0 ? 0 : at * Math.sin(angle)
    evaluatePolynomial(c, degree, re, im, value)
    newtonStep(work, re, im)
    steps[k] = Math.hypot(work.step.re, work.step.im)
  }
  const starts: number[] = []
  for (let k = 0; k <= ANGLES; k++) {
    if ((k === 0 || steps[k - 1] >= steps[k]) && (k === ANGLES || steps[k + 1] >= steps[k])) starts.push(k)
  }
  starts.sort((a, b) => steps[a] - steps[b])
  for (const k of starts.slice(0, STARTS)) {
    const angle = (Math.PI * k) / ANGLES
    if (tryFrom(c, degree, noise, at * Math.cos(angle), k === 0 || k === ANGLES ? 0 : at * Math.sin(angle), work)) return true
  }
  return false
}
