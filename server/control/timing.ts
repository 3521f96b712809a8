import { NumericError } from './errors.ts'
import { guardNumber } from './model.ts'

/** Largest p + q of an admitted pair of rates. */
export const PQ_LIMIT = 512

/** The two tasks' pattern over one hyperperiod, control-model.md §2. */
export interface Timing {
  /** f_c/f_o = p/q in lowest terms. */
  readonly p: number
  readonly q: number
  readonly T_c: number
  readonly T_o: number
  readonly T_h: number
  /** Outer tick k falls into current period `tick[k]`, `offset[k]`/q of a period after its tick (0: together, the outer task first). */
  readonly tick: Int32Array
  readonly offset: Int32Array
}

/**
 * Reduces two rates to p/q exactly and lays out the ticks of one hyperperiod.
 *
 * Rates are read as the decimals they print as, so that 0.1 Hz steps stay rational. A ratio such as 26/7 that no decimal
 * can state is accepted where the given number is the double nearest to it.
 *
 * @throws NumericError rates-refused, with the admissible outer rate of least relative change where there is one
 * @source control-model.md §2
 */
export function timingOf(f_c: number, f_o: number): Timing {
  guardNumber('firmware.f_c', f_c, 'positive')
  guardNumber('firmware.f_o', f_o, 'positive')
  if (f_c < f_o) {
    throw new NumericError('rates-refused', {
      field: 'firmware.f_o',
      value: f_o,
      limit: f_c,
      proposal: f_c,
      text: `Refused: the outer task (${f_o} Hz) runs faster than the current task (${f_c} Hz). Nothing was computed. Set f_o to at most ${f_c} Hz.`,
    })
  }
  // A sweep asks for the same pair at every point; the layout is read-only.
  if (last && last.f_c === f_c && last.f_o === f_o) return last.timing
  const [p, q] = ratioOf(f_c, f_o)
  const tick = new Int32Array(q)
  const offset = new Int32Array(q)
  for (let k = 0; k < q; k++) {
    tick[k] = Math.floor((k * p) / q)
    offset[k] = (k * p) % q
  }
  last = { f_c, f_o, timing: { p, q, T_c: 1 / f_c, T_o: 1 / f_o, T_h: p / f_c, tick, offset } }
  return last.timing
}

let last: { readonly f_c: number; readonly f_o: number; readonly timing: Timing } | null = null

function ratioOf(f_c: number, f_o: number): readonly [number, number] {
  const [a, b] = decimalFraction(f_c)
  const [c, d] = decimalFraction(f_o)
  const numerator = a * d
  const denominator = b * c
  const g = gcd(numerator, denominator)
  const p = numerator / g
  const q = denominator / g
  if (p + q <= BigInt(PQ_LIMIT)) return [Number(p), Number(q)]
  const nearest = nearestAdmissible(f_c, f_o)
  // Two roundings, of the ratio and of the rate itself, part a stated rate from its own ratio.
  if (Math.abs(nearest.f_o / f_o - 1) <= 2 * Number.EPSILON) return [nearest.p, nearest.q]
  throw new NumericError('rates-refused', {
    field: 'firmware.f_o',
    value: f_o,
    limit: PQ_LIMIT,
    proposal: nearest.f_o,
    text:
      `Refused: f_c/f_o = ${p}/${q}, and p + q exceeds ${PQ_LIMIT}. Nothing was computed. ` +
      `The admissible outer rate with the least relative change is ${nearest.f_o} Hz (${nearest.p}/${nearest.q}).`,
  })
}

/** The admissible ratio whose outer rate differs least, relatively, from `f_o`. */
export function nearestAdmissible(f_c: number, f_o: number): { readonly p: number; readonly q: number; readonly f_o: number } {
  let best = { p: 1, q: 1, f_o: f_c }
  let least = Infinity
  for (let q = 1; q <= PQ_LIMIT / 2; q++) {
    const wanted = (q * f_c) / f_o
    for (const candidate of [Math.floor(wanted), Math.ceil(wanted)]) {
      const p = Math.min(Math.max(candidate, q), PQ_LIMIT - q)
      const rate = (f_c * q) / p
      const change = Math.abs(rate / f_o - 1)
      // Smaller terms are met first, so a tie keeps the pair in lowest terms.
      if (change < least) {
        least = change
        best = { p, q, f_o: rate }
      }
    }
  }
  return best
}

/** A double as the fraction of the shortest decimal that prints it. */
function decimalFraction(value: number): readonly [bigint, bigint] {
  const [mantissa, exponentText] = value.toString().toLowerCase().split('e')
  const [whole, fraction = ''] = mantissa.split('.')
  const exponent = Number(exponentText ?? 0) - fraction.length
  const digits = BigInt(whole + fraction)
  return exponent >= 0 ? [digits * 10n ** BigInt(exponent), 1n] : [digits, 10n ** BigInt(-exponent)]
}

function gcd(a: bigint, b: bigint): bigint {
  while (b > 0n) [a, b] = [b, a % b]
  return a
}
