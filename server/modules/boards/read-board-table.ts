import { CsvError, parse } from 'csv-parse/sync'
import { DomainError } from '../../http/errors.ts'

/** A row of a table of boards as it was typed; absent columns read as empty. */
export interface TypedRow {
  line: number
  serial: string
  machine: string
  joint: string
  release: string
  firmware: string
}

const columns = ['serial', 'machine', 'joint', 'release', 'firmware'] as const
/** Columns of an export that say what Detent itself found: an import never claims them. */
const passedOver = ['known', 'state', 'recorded']
const mostRows = 5000

const refuse = (line: number, detail: string): never => {
  throw new DomainError('content-invalid', `The table can't be read: line ${line}: ${detail} Nothing was recorded; correct the file and choose it again.`, { fields: [{ pointer: '/text', detail: `line ${line}: ${detail}` }], extra: { line } })
}

function headerOf(cells: string[]): string[] {
  const names = cells.map((c) => c.toLowerCase())
  const unknown = names.find((n) => ![...columns, ...passedOver].includes(n))
  if (unknown !== undefined) refuse(1, `"${unknown.slice(0, 40)}" is no column; a table has ${columns.join(', ')}.`)
  const twice = names.find((n, i) => names.indexOf(n) !== i)
  if (twice !== undefined) refuse(1, `the column "${twice}" stands twice.`)
  if (!names.includes('serial')) refuse(1, 'the column "serial" is missing; the first line names the columns.')
  return names
}

/**
 * Rows of a CSV table of boards: comma, semicolon or tab between the columns, which the first line names in any order.
 *
 * @throws DomainError content-invalid naming the line
 */
export function readBoardTable(text: string): TypedRow[] {
  let records: { record: Record<string, string>; info: { lines: number } }[]
  try {
    records = parse(text, { bom: true, columns: headerOf, delimiter: [',', ';', '\t'], info: true, skip_empty_lines: true, trim: true, to: mostRows + 1 }) as unknown as typeof records
  } catch (error) {
    if (!(error instanceof CsvError)) throw error
    const line = Number((error as CsvError & { lines?: number }).lines ?? 1)
    return refuse(line, error.code === 'CSV_RECORD_INCONSISTENT_COLUMNS' || error.code === 'CSV_RECORD_INCONSISTENT_FIELDS_LENGTH' ? 'it has another number of columns than the first line.' : 'a quoted cell is not closed, or a quote stands in the middle of one.')
  }
  if (records.length === 0) refuse(1, 'the table has no row.')
  if (records.length > mostRows) refuse(mostRows + 2, `a table has at most ${mostRows} rows.`)
  return records.map(({ record, info }) => ({ line: info.lines, ...(Object.fromEntries(columns.map((c) => [c, (record[c] ?? '').trim()])) as Record<(typeof columns)[number], string>) }))
}
