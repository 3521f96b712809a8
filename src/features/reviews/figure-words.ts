import type { ValueEffect } from '../../../shared/contract/reviews.ts'
import { formatFixed, formatQuantity } from '../../lib/format.ts'

/** "velocity phase", "torque at clamp": a margin goes by its loop. */
export const figureName = ({ figure, loop }: ValueEffect): string => (loop === null ? figure.replace(' at the ', ' at ') : `${loop} ${figure.replace(/ margin$/, '')}`)

export interface Shown {
  before: string
  after: string
  unit: string
}

/** Both sides in one unit, so that they compare; words where there is no number. */
export function shownEffect({ before, after, beforeReads, afterReads, unit }: ValueEffect): Shown {
  const fixed = unit === '°' || unit === 'dB' || unit === '%'
  const taken = after ?? before
  const quantity = taken === null || fixed ? null : formatQuantity(taken, unit, { digits: 3 })
  const factor = quantity && taken !== null && taken !== 0 && quantity.power === 0 && quantity.unit !== unit ? scaleOf(taken, unit) : 1
  const text = (value: number | null, words: string) => (value === null ? words || 'none' : fixed ? formatFixed(value, 1) : formatQuantity(value * factor, '', { digits: 3 }).number)
  return { before: text(before, beforeReads), after: text(after, afterReads), unit: taken === null ? '' : (quantity?.unit ?? unit) }
}

/** What a value is multiplied by to stand under the prefix that its unit takes. */
function scaleOf(value: number, unit: string): number {
  const prefixed = formatQuantity(value, unit, { digits: 3 }).unit
  const powers: Record<string, number> = { G: -9, M: -6, k: -3, m: 3, µ: 6, n: 9, p: 12 }
  return 10 ** (powers[prefixed.slice(0, prefixed.length - unit.length)] ?? 0)
}

export const missesPolicy = ({ after, policy }: ValueEffect): boolean => policy !== null && after !== null && (policy.forbidden === 'below' ? after < policy.limit : after > policy.limit)

/** Ends of the small ruler: those that every ruler of this figure has, wider where the figure lies outside. */
export function rangeOf({ unit, figure, before, after }: ValueEffect): { min: number; max: number; scale: 'linear' | 'log' } | null {
  const values = [before, after].filter((v): v is number => v !== null)
  if (values.length === 0) return null
  const most = Math.max(...values)
  if (unit === '°') return { min: Math.min(0, ...values), max: Math.max(90, most), scale: 'linear' }
  if (unit === 'dB') return { min: Math.min(0, ...values), max: Math.max(30, most), scale: 'linear' }
  if (figure === 'bandwidth') return { min: Math.min(...values) / 3, max: most * 3, scale: 'log' }
  return most > 0 ? { min: 0, max: most * 1.3, scale: 'linear' } : null
}
