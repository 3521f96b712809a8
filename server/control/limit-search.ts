import { guardNumber, type JointModel } from './model.ts'
import { parameterNamed, valueOf, withValues } from './parameters.ts'
import { verdict } from './verdict.ts'

export type StabilityLimit =
  | { readonly kind: 'none-up-to'; readonly limit: number }
  | { readonly kind: 'limit'; readonly value: number }

/** Ratio of neighbouring trial values: a stable (or unstable) band narrower than this may be passed over. */
const STRIDE = 1.04

/**
 * Smallest value of a parameter, above the one it has, at which ρ = 1.
 *
 * Walks up in steps of 4 % to the first change of ρ − 1's sign, then closes in (Illinois' regula falsi).
 *
 * @param upTo  where the walk ends
 * @accuracy    1e-10 relative (limit-search.test.ts: closed forms of §7)
 */
export function limitAbove(model: JointModel, name: string, upTo: number): StabilityLimit {
  const parameter = parameterNamed(name)
  guardNumber('upTo', upTo, 'positive')
  const from = valueOf(model, parameter)
  const excess = (value: number): number => verdict(withValues(model, [parameter], [value])).rho - 1
  let low = from
  let below = excess(low)
  // A gain of exactly 0 has no ratio to step by: begin far under any limit.
  let next = from > 0 ? from * STRIDE : upTo * 1e-12
  while (low < upTo) {
    const high = Math.min(next, upTo)
    const above = excess(high)
    if (above === 0 || (below !== 0 && above > 0 !== below > 0)) return { kind: 'limit', value: between(excess, low, below, high, above) }
    low = high
    below = above
    next = high * STRIDE
  }
  return { kind: 'none-up-to', limit: upTo }
}

function between(f: (x: number) => number, low: number, atLow: number, high: number, atHigh: number): number {
  let a = low
  let fa = atLow
  let b = high
  let fb = atHigh
  let best = Math.abs(fa) < Math.abs(fb) ? a : b
  let least = Math.min(Math.abs(fa), Math.abs(fb))
  let side = 0
  for (let step = 0; step < 100 && b - a > 1e-15 * b && least > 0; step++) {
    let x = step % 6 === 5 ? 0.5 * (a + b) : (a * fb - b * fa) / (fb - fa)
    if (!(x > a && x < b)) x = 0.5 * (a + b)
    const fx = f(x)
    if (Math.abs(fx) < least) {
      least = Math.abs(fx)
      best = x
    }
    if (fx > 0 === fb > 0) {
      b = x
      fb = fx
      if (side === -1) fa /= 2
      side = -1
    } else {
      a = x
      fa = fx
      if (side === 1) fb /= 2
      side = 1
    }
  }
  return best
}
