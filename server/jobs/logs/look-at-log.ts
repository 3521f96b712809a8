/** The first lines of a log: how its text is laid out, and what its columns are called. */
import { logSignals, unitProblem, type ColumnMapping, type LogLayout, type LogSignal } from '../../../shared/contract/evidence.ts'
import { splitRow } from './split-row.ts'

export type LogLook = { kind: 'layout'; layout: LogLayout } | { kind: 'refused'; message: string }

const refused = (message: string): LogLook => ({ kind: 'refused', message })

const delimiters = [',', ';', '\t', '|'] as const
const number = { '.': /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/, ',': /^[+-]?(?:\d+,?\d*|,\d+)(?:[eE][+-]?\d+)?$/ } as const
/** Written for a value that is none; such rows are dealt with when the log is read. */
const noNumber = /^(?:nan|na|n\/a|null|[+-]?inf(?:inity)?)?$/i
const mostColumns = 256
/** Lines looked at for the layout. */
const linesSeen = 200

/**
 * Finds delimiter, decimal mark, header, units and first row in the beginning of a log.
 *
 * @param head  the log's first bytes, some tens of kilobytes
 */
export function lookAtLog(head: Uint8Array): LogLook {
  const notes: string[] = []
  if ((head[0] === 0xff && head[1] === 0xfe) || (head[0] === 0xfe && head[1] === 0xff)) return refused('The file is UTF-16 text. Save it as UTF-8 and upload it again.')
  if (head.includes(0)) return refused('The file holds zero bytes: it is no text. Export the log as CSV and upload that.')
  let text: string
  try {
    // The head may end inside a character.
    text = new TextDecoder('utf-8', { fatal: true }).decode(head, { stream: true })
  } catch {
    text = new TextDecoder('windows-1252').decode(head)
    notes.push('The text is not UTF-8; column names were read as Windows-1252.')
  }
  if (head[0] === 0xef && head[1] === 0xbb && head[2] === 0xbf) notes.push('A byte order mark at the beginning was left out.')
  const lines = text.replace(/^\uFEFF/, '').split(/\r\n|\n|\r/)
  const complete = lines.length > 1 ? lines.slice(0, -1) : lines
  const seen = complete.slice(0, linesSeen)
  if (seen.every((l) => l.trim() === '')) return refused('The file holds no lines. Export the log again.')
  if (seen.some((l) => l.length > 20_000)) return refused('A line is longer than 20 000 characters: it is no log of rows and columns.')
  const found = best(seen)
  if (!found) return refused('No row of numbers stands in its first 200 lines. A log has one row an instant, its columns parted by commas, semicolons, tabs or bars.')
  const { delimiter, decimal, first, width } = found
  if (width < 2) return refused('The file has one column alone. A log needs a time and a current at least; its columns are parted by commas, semicolons, tabs or bars.')
  if (width > mostColumns) return refused(`The file has ${width} columns, more than ${mostColumns}. Export fewer signals.`)
  const above = seen.slice(0, first).map((l) => splitRow(l.replace(/^[#%]\s*/, ''), delimiter)).filter((cells) => cells.length === width)
  const unitsApart = above.length >= 2 && isUnits(above[above.length - 1])
  const names = unitsApart ? above[above.length - 2] : above[above.length - 1]
  if (!names) notes.push('There is no line with column names; the columns are called by their number.')
  if (decimal === ',') notes.push('Numbers are written with a decimal comma.')
  if (first > (names ? (unitsApart ? 2 : 1) : 0)) notes.push(`${first} lines before the first row of numbers were left out.`)
  const rows = seen.slice(first, first + 3).map((l) => splitRow(l, delimiter))
  const columns = Array.from({ length: width }, (_, k) => {
    const { name, unit } = named(names?.[k]?.trim() || `column ${k + 1}`)
    return { name: name.slice(0, 80), unit: (unitsApart ? above[above.length - 1][k].trim().replace(/^[[(]|[\])]$/g, '') : unit).slice(0, 20), samples: rows.map((r) => (r[k] ?? '').slice(0, 30)) }
  })
  return { kind: 'layout', layout: { delimiter, decimal, skipped: first, columns, notes } }
}

interface Found {
  delimiter: LogLayout['delimiter']
  decimal: LogLayout['decimal']
  /** line of the first row of numbers */
  first: number
  width: number
}

/** The way of parting that gives the most rows of numbers of one width; of equals the wider. */
function best(lines: readonly string[]): Found | null {
  let found: (Found & { rows: number }) | null = null
  for (const delimiter of delimiters)
    for (const decimal of delimiter === ',' ? (['.'] as const) : (['.', ','] as const)) {
      const widths = lines.map((l) => numericWidth(splitRow(l, delimiter), decimal))
      const counts = new Map<number, number>()
      for (const w of widths) if (w > 0) counts.set(w, (counts.get(w) ?? 0) + 1)
      for (const [width, rows] of counts) {
        const first = widths.indexOf(width)
        if (!found || width * rows > found.width * found.rows) found = { delimiter, decimal, first, width, rows }
      }
    }
  return found
}

/** Cells of a row whose filled cells are numbers, most of them; 0 for any other line. */
function numericWidth(cells: readonly string[], decimal: '.' | ','): number {
  const numbers = cells.filter((c) => number[decimal].test(c.trim())).length
  const rest = cells.every((c) => number[decimal].test(c.trim()) || noNumber.test(c.trim()))
  return rest && numbers * 2 >= cells.length && numbers > 0 ? cells.length : 0
}

const isUnits = (cells: readonly string[]) => cells.some((c) => c.trim() !== '') && cells.every((c) => c.trim() === '' || logSignals.some((s) => unitProblem(s, c.trim().replace(/^[[(]|[\])]$/g, '')) === null))

/** "speed [rpm]", "i (mA)", "u / V", "t_ms": a name with the unit it states. */
function named(title: string): { name: string; unit: string } {
  const stated = /^(.*?)\s*(?:\[([^\]]*)\]|\(([^)]*)\)|\s\/\s*(\S+))\s*$/.exec(title) ?? /^(.+?)[_ ](us|ms|s|deg|rad|rpm|mA|A|mV|V|pct)$/.exec(title)
  const unit = (stated?.[2] ?? stated?.[3] ?? stated?.[4] ?? '').trim().replace('pct', '%')
  return stated && unit && logSignals.some((s) => unitProblem(s, unit) === null) ? { name: stated[1].trim(), unit } : { name: title, unit: '' }
}

const words: readonly (readonly [LogSignal, RegExp, string])[] = [
  ['time', /^(t|time|timestamp|zeit|ticks?)\b/i, 's'],
  ['set-point', /(set.?point|reference|demand|target|_ref\b|\bref\b|command)/i, 'rad'],
  ['position', /(position|angle|theta|\bpos\b)/i, 'rad'],
  ['speed', /(speed|velocity|omega|\bvel\b)/i, 'rad/s'],
  ['current', /(current|\bi\b|\bi_\w+|iq\b|amps?)/i, 'A'],
  ['voltage', /(voltage|\bu\b|\bv\b|volts?)/i, 'V'],
  ['duty', /(duty|pwm)/i, '1'],
]

/** A first guess of which column is which, from names and stated units. */
export function guessMapping(columns: LogLayout['columns']): ColumnMapping[] {
  const taken = new Set<number>()
  return words.flatMap(([signal, name, usual]): ColumnMapping[] => {
    const column = columns.findIndex((c, k) => !taken.has(k) && name.test(c.name.replaceAll('_', ' ')) && (c.unit === '' || unitProblem(signal, c.unit) === null))
    if (column < 0) return []
    taken.add(column)
    return [{ signal, column, unit: columns[column].unit || usual }]
  })
}
