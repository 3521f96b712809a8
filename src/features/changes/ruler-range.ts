import type { ScaleKind } from '../../components/ui/ruler-scale.ts'
import { boundsOf, numberOf } from './typed-value.ts'
import type { ValueAt } from './value-cells.ts'

export interface RulerRange {
  min: number
  max: number
  scale: ScaleKind
}

/** A bound ratio past which a logarithmic ruler is used. */
const WIDE = 20

/**
 * The stretch a ruler shows: the schema's bounds; for a gain that may be 0, from a decade below what was released, so that a small gain
 * under a large bound does not stick at the end. Null where there are no bounds on both sides, or no number.
 */
export function rulerRange({ parameter, value, released }: Pick<ValueAt, 'parameter' | 'value' | 'released'>): RulerRange | null {
  const { min, max } = boundsOf(parameter)
  if (min === null || max === null || !(max > min) || parameter.choices) return null
  if (min > 0) return { min, max, scale: max / min > WIDE ? 'log' : 'linear' }
  const anchors = [numberOf(released), numberOf(parameter.default ?? undefined)].filter((n): n is number => n !== null && n > 0)
  const now = numberOf(value)
  const gain = parameter.role !== null && /\.k[pi]$/.test(parameter.role)
  if (min < 0 || !gain || anchors.length === 0 || now === null || now <= 0 || numberOf(released) === 0) return { min, max, scale: 'linear' }
  const low = 10 ** Math.floor(Math.log10(Math.min(...anchors) / 5))
  return now < low || max / low < WIDE ? { min, max, scale: 'linear' } : { min: low, max, scale: 'log' }
}

/** What one press of an arrow key adds: one for whole numbers, else a unit of the second digit. */
export function stepOf({ parameter, value }: Pick<ValueAt, 'parameter' | 'value'>): number | undefined {
  const now = numberOf(value)
  if (parameter.choices || now === null) return undefined
  if (parameter.kind === 'integer') return now >= 1000 ? 10 ** (Math.floor(Math.log10(now)) - 1) : 1
  const size = Math.abs(now) || Math.abs(numberOf(parameter.default ?? undefined) ?? 1) || 1
  return 10 ** (Math.floor(Math.log10(size)) - 1)
}
