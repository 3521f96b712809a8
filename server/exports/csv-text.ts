/**
 * One CSV line (RFC 4180), with \n.
 *
 * A text that a spreadsheet would take for a formula is written with a leading apostrophe: titles come from uploaded schemas, names from
 * people. That holds for its start, for its start after blanks, and for the start of what a spreadsheet set to another separator would take
 * for a cell of its own. A plain number keeps its sign; a sum such as -2+3 does not count as one.
 *
 * @source OWASP, CSV Injection: cells that begin with = + - @, tab, carriage return or line feed (full-width forms too), and the same after a separator inside a cell
 */
export const csvLine = (cells: readonly (string | number | null)[]): string => `${cells.map(cell).join(',')}\n`

const NUMBER = /^[+-]?\d+(?:\.\d+)?(?:e[+-]?\d+)?$/i
/** Where a formula may begin: at the start, or after a separator or a line end, blanks skipped. */
const FORMULA = /(^|[;\t\r\n])([\s\u0000-\u001f\u200b\ufeff]*)(?=[=+@\-\uff1d\uff0b\uff20\uff0d])/g

function cell(value: string | number | null): string {
  if (value === null) return ''
  if (typeof value === 'number') return String(value)
  const safe = NUMBER.test(value) ? value : value.replace(FORMULA, "$1$2'").replace(/^(?=[\t\r\n])/, "'")
  return /[",;\t\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe
}
