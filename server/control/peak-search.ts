const GOLDEN = 0.5 * (3 - Math.sqrt(5))
/** Where the search ends, in parts of the interval; the value errs by the square of that. */
const ENOUGH = 1e-4
const STEPS = 40

export interface PeakFound {
  readonly psi: number
  readonly value: number
}

/**
 * Maximum of f on [low, high]: parabolas through the best three points, golden section where they do not serve.
 *
 * @source R. P. Brent, Algorithms for Minimization without Derivatives, 1973, ch. 5, from memory
 */
export function peakBetween(f: (psi: number) => number, low: number, high: number): PeakFound {
  const near = ENOUGH * (high - low)
  let a = low
  let b = high
  let x = a + GOLDEN * (b - a)
  let fx = f(x)
  // The second and third best, and how far the last two steps went.
  let w = x
  let fw = fx
  let v = x
  let fv = fx
  let last = 0
  let before = 0
  for (let step = 0; step < STEPS; step++) {
    const middle = 0.5 * (a + b)
    if (Math.abs(x - middle) <= 2 * near - 0.5 * (b - a)) break
    let move = 0
    let parabola = false
    if (Math.abs(before) > near) {
      const r = (x - w) * (fx - fv)
      let q = (x - v) * (fx - fw)
      let p = (x - v) * q - (x - w) * r
      q = 2 * (q - r)
      if (q > 0) p = -p
      q = Math.abs(q)
      if (Math.abs(p) < Math.abs(0.5 * q * before) && p > q * (a - x) && p < q * (b - x)) {
        parabola = true
        before = last
        move = p / q
        const u = x + move
        if (u - a < 2 * near || b - u < 2 * near) move = x < middle ? near : -near
      }
    }
    if (!parabola) {
      before = x < middle ? b - x : a - x
      move = GOLDEN * before
    }
    last = move
    const u = x + (Math.abs(move) >= near ? move : move > 0 ? near : -near)
    const fu = f(u)
    if (fu >= fx) {
      if (u >= x) a = x
      else b = x
      v = w
      fv = fw
      w = x
      fw = fx
      x = u
      fx = fu
      continue
    }
    if (u < x) a = u
    else b = u
    if (fu >= fw || w === x) {
      v = w
      fv = fw
      w = u
      fw = fu
    } else if (fu >= fv || v === x || v === w) {
      v = u
      fv = fu
    }
  }
  return { psi: x, value: fx }
}
