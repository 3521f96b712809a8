import type { Value } from '../../../shared/parameters/machine-set.ts'
import { formatExact } from '../../lib/format.ts'

/** A parameter's value as it was given: digits untouched, truth values as words; a dash for none. */
export function valueText(value: Value | null | undefined): string {
  if (value === null || value === undefined) return '–'
  if (typeof value === 'boolean') return value ? 'on' : 'off'
  return formatExact(String(value))
}
