import { formatExact } from '../../lib/format.ts'

/** A stored field as text: a quantity with its bounds in brackets, devices by name. */
export function content(text: string | null): string {
  if (text === null) return 'none'
  try {
    const value = JSON.parse(text) as unknown
    if (typeof value === 'object' && value !== null && 'value' in value && 'low' in value && 'high' in value) {
      const q = value as { value: number; low: number; high: number }
      return `${formatExact(String(q.value))} (${formatExact(String(q.low))} to ${formatExact(String(q.high))})`
    }
    if (Array.isArray(value)) return value.length === 0 ? 'none' : value.map((v) => (typeof v === 'object' && v !== null && 'name' in v ? String((v as { name: unknown }).name) : JSON.stringify(v))).join(', ')
    return typeof value === 'number' ? formatExact(String(value)) : String(value)
  } catch {
    return text
  }
}
