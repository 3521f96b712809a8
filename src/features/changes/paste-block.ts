import { same, type Edit } from '../../../shared/parameters/edits.ts'
import type { Value } from '../../../shared/parameters/machine-set.ts'
import type { Parameter } from '../../../shared/registers/parameter-schema.ts'
import { readTyped } from './typed-value.ts'
import { editTo } from './use-typed-value.ts'
import type { ValueAt } from './value-cells.ts'
import type { Column } from './value-table.ts'

/** A block as spreadsheets put it on the clipboard: cells by tabs, rows by lines; a cell with a tab, a line or a quote in it is quoted, its quotes doubled. */
export function readBlock(text: string): string[][] {
  const rows: string[][] = [[]]
  let cell = ''
  let quoted = false
  const end = () => {
    rows[rows.length - 1].push(cell.trim())
    cell = ''
  }
  for (let k = 0; k < text.length; k += 1) {
    const c = text[k]
    if (quoted) {
      if (c !== '"') cell += c
      else if (text[k + 1] === '"') {
        cell += '"'
        k += 1
      } else quoted = false
    } else if (c === '"' && cell === '') quoted = true
    else if (c === '\t') end()
    else if (c === '\n') {
      end()
      rows.push([])
    } else if (c !== '\r') cell += c
  }
  if (cell !== '' || rows[rows.length - 1].length > 0) end()
  return rows.filter((row, k) => row.length > 0 && !(k === rows.length - 1 && row.every((c) => c === '')))
}

export type PastedCell = { text: string; parameter: Parameter | null; column: Column | null; at: ValueAt | null } & (
  | { kind: 'set'; value: Value; edit: Edit }
  | { kind: 'same' }
  | { kind: 'empty' }
  | { kind: 'bad'; why: string }
)

export interface PastedBlock {
  rows: { parameter: Parameter | null; cells: PastedCell[] }[]
  columns: (Column | null)[]
  /** how the rows and columns were found, in words; empty: from the chosen cell on */
  headings: string
  counts: Record<PastedCell['kind'], number>
}

export interface PasteTarget {
  /** rows and columns as they stand on the screen */
  rows: readonly Parameter[]
  columns: readonly Column[]
  /** the chosen cell: the block's upper left corner */
  anchor: { row: number; column: number }
  at: (column: Column, row: Parameter) => ValueAt | null
}

const heading = (text: string) => text.trim().toLowerCase().replace(/\s+/g, ' ')

/** Column that a heading names: by key or printed name. */
const columnNamed = (text: string, columns: readonly Column[]): Column | null => columns.find((c) => heading(c.title) === heading(text) || (c.place.kind === 'joint' && c.key === heading(text))) ?? null

/** Parameter that a heading names: by title or name, a unit in brackets after it left out. */
const rowNamed = (text: string, rows: readonly Parameter[]): Parameter | null => {
  const bare = heading(text.replace(/\s*[[(][^\])]*[\])]\s*$/, ''))
  return rows.find((p) => heading(p.title) === bare || p.name.toLowerCase() === bare) ?? null
}

function readCell(text: string, parameter: Parameter | null, column: Column | null, target: PasteTarget): PastedCell {
  const at = parameter && column ? target.at(column, parameter) : null
  const of = { text, parameter, column, at }
  if (text === '') return { ...of, kind: 'empty' }
  if (!parameter) return { ...of, kind: 'bad', why: 'There is no row here: the block is longer than the table.' }
  if (!column) return { ...of, kind: 'bad', why: 'There is no joint here: the block is wider than the table.' }
  if (!at) return { ...of, kind: 'bad', why: `The firmware version of ${column.title} has no ${parameter.title.toLowerCase()}.` }
  const read = readTyped(at.parameter, text)
  if (read.kind === 'refused') return { ...of, kind: 'bad', why: read.message }
  const edit = editTo(at, read.value)
  // What is inherited already needs no value of its own.
  if (!edit || (at.own === undefined && same(at.value, read.value))) return { ...of, kind: 'same' }
  return { ...of, kind: 'set', value: read.value, edit }
}

/**
 * Lays a block over the table: from the chosen cell on, or where its own headings say (a first row of joints, a first column of parameters).
 *
 * @returns every cell read with units, as old → new or with why not; nothing is altered yet
 */
export function placeBlock(block: readonly (readonly string[])[], target: PasteTarget): PastedBlock {
  const { rows, columns, anchor } = target
  const [first = []] = block
  const headed = first.length > 1 && first.slice(1).every((c) => columnNamed(c, columns) !== null)
  const body = headed ? block.slice(1) : block
  const wholeHead = !headed && first.length > 0 && block.length > 1 && first.every((c) => columnNamed(c, columns) !== null)
  const below = wholeHead ? block.slice(1) : body
  const named = below.length > 0 && below.every((row) => rowNamed(row[0] ?? '', rows) !== null)
  const skip = named || headed ? 1 : 0
  const width = Math.max(0, ...below.map((row) => row.length - skip))
  const columnAt = (k: number): Column | null => (headed ? columnNamed(first[k + 1] ?? '', columns) : wholeHead ? columnNamed(first[k] ?? '', columns) : (columns[anchor.column + k] ?? null))
  const found = Array.from({ length: width }, (_, k) => columnAt(k))
  const placed = below.map((row, r) => {
    const parameter = named ? rowNamed(row[0], rows) : (rows[anchor.row + r] ?? null)
    return { parameter, cells: found.map((column, k) => readCell(row[k + skip] ?? '', parameter, column, target)) }
  })
  const counts: PastedBlock['counts'] = { set: 0, same: 0, empty: 0, bad: 0 }
  for (const row of placed) for (const cell of row.cells) counts[cell.kind] += 1
  const headings = [(headed || wholeHead) && 'columns by the names in its first row', named && 'rows by the names in its first column'].filter(Boolean).join(', ')
  return { rows: placed, columns: found, headings, counts }
}

/** The edits of the good cells. */
export const editsOf = (block: PastedBlock): Edit[] => block.rows.flatMap((row) => row.cells.flatMap((c) => (c.kind === 'set' ? [c.edit] : [])))
