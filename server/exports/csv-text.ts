/**
 * One CSV line (RFC 4180), with \n.
 *
 * A text that a spreadsheet would take for a formula is written with a leading apostrophe: titles come from uploaded schemas.
 * A signed number stays one; a sum such as -2+3 does not.
 */
export const csvLine = (cells: readonly (string | number | null)[]): string => `${cells.map(cell).join(',')}\n`

function cell(value: string | number | null): string {
  if (value === null) return ''
  if (typeof value === 'number') return String(value)
  const safe = /^[=+@\t\r-]/.test(value) && !/^[+-]?\d+(\.\d+)?(e[+-]?\d+)?$/i.test(value) ? `'${value}` : value
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe
}
