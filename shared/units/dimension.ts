/**
 * Dimension of a unit: powers of the base kinds. Angle and counting words are kinds of their own, so that
 * A·s/rad is not A·s and a window in samples is not a plain number.
 */
export const BASES = ['s', 'm', 'kg', 'A', 'K', 'rad', 'count'] as const
export type Base = (typeof BASES)[number]
export type Dimension = Readonly<Record<Base, number>>

export const NO_DIMENSION: Dimension = { s: 0, m: 0, kg: 0, A: 0, K: 0, rad: 0, count: 0 }

export const dimension = (powers: Partial<Record<Base, number>>): Dimension => ({ ...NO_DIMENSION, ...powers })

export const sameDimension = (a: Dimension, b: Dimension): boolean => BASES.every((base) => a[base] === b[base])

/** a · b^power. */
export const combine = (a: Dimension, b: Dimension, power: number): Dimension =>
  Object.fromEntries(BASES.map((base) => [base, a[base] + power * b[base]])) as Record<Base, number>

/** Text such as `A·s/rad`, for messages. */
export function dimensionText(d: Dimension): string {
  const part = (sign: 1 | -1): string[] =>
    BASES.filter((base) => d[base] * sign > 0).map((base) => base + (Math.abs(d[base]) === 1 ? '' : `^${Math.abs(d[base])}`))
  const over = part(1)
  const under = part(-1)
  if (over.length + under.length === 0) return '1'
  const below = under.length > 1 ? `(${under.join('·')})` : under.join('')
  return (over.join('·') || '1') + (under.length ? `/${below}` : '')
}
