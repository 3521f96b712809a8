import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { applyEdits } from '../../shared/parameters/edits.ts'
import { gridState, selectionOf, startState } from '../../src/features/changes/grid-state.ts'
import { editsOf, placeBlock, readBlock, type PasteTarget } from '../../src/features/changes/paste-block.ts'
import { spansOf } from '../../src/features/changes/use-column-window.ts'
import { columnsOf, isOutOfPolicy, outOfPolicy, rowsOf, rowWanted, TableCells } from '../../src/features/changes/value-table.ts'
import { aSet, schemas } from './a-change.ts'
import { finding } from './a-check.ts'

const set = aSet()
const families = Object.keys(set.families)
const columns = columnsOf(set, families)
const cells = new TableCells({ set, base: set, schemas })
const rows = rowsOf(set, families, schemas).flatMap((g) => g.rows)
const rowNumber = (title: string) => rows.findIndex((r) => r.title === title)
const columnNumber = (key: string) => columns.findIndex((c) => c.key === key)
const target = (row: string, column: string): PasteTarget => ({ rows, columns, anchor: { row: rowNumber(row), column: columnNumber(column) }, at: (c, r) => cells.at(c, r) })

describe('a block from a spreadsheet', () => {
  it('is rows by lines and cells by tabs; quoted cells hold tabs, lines and quotes', () => {
    expect(readBlock('1\t2\r\n3\t4\r\n')).toEqual([['1', '2'], ['3', '4']])
    expect(readBlock('a\t\n\tb\n')).toEqual([['a', ''], ['', 'b']])
    expect(readBlock('"a\tb"\t"c\nd"\t"e""f"')).toEqual([['a\tb', 'c\nd', 'e"f']])
    expect(readBlock('')).toEqual([])
  })

  it('is read back as it was written', () => {
    const cell = fc.string().map((s) => s.replaceAll(/[\r]/g, '').trim()).filter((s) => s !== '')
    const written = (text: string) => (/[\t\n"]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text)
    fc.assert(fc.property(fc.array(fc.array(cell, { minLength: 1, maxLength: 4 }), { minLength: 1, maxLength: 4 }), (block) => {
      expect(readBlock(block.map((row) => row.map(written).join('\t')).join('\n'))).toEqual(block)
    }), { seed: 20261201 })
  })

  it('is laid from the chosen cell on; units are read, what stands already is left alone, bad cells say why', () => {
    const block = placeBlock(readBlock('3.5\t3.2\n24\tfast\n14 samples\t72'), target('Velocity gain', 'l1-knee'))
    expect(block.counts).toEqual({ set: 2, same: 2, empty: 0, bad: 2 })
    expect(block.headings).toBe('')
    expect(block.rows[0].cells[0]).toMatchObject({ kind: 'set', value: 3.5, edit: { pointer: '/joints/l1-knee/values/velocityGain', to: 3.5 } })
    // R3 knee has 2.9 of its own, so that 3.2 alters it
    expect(block.rows[0].cells[1]).toMatchObject({ kind: 'set', edit: { pointer: '/joints/r3-knee/values/velocityGain', from: 2.9, to: 3.2 } })
    expect(block.rows[1].cells[1]).toMatchObject({ kind: 'bad', text: 'fast' })
    expect(block.rows[2].cells[1]).toMatchObject({ kind: 'bad', why: expect.stringContaining('above the maximum 64') })
  })

  it('is laid by its own headings where it has them, units in brackets left out', () => {
    const block = placeBlock(readBlock('\tR3 knee\tl1-knee\nCurrent limit [A]\t350 mA\t2.5\nvelocityGain\t3\t\n'), target('Position gain', 'family knee'))
    expect(block.headings).toBe('columns by the names in its first row, rows by the names in its first column')
    expect(editsOf(block)).toEqual([
      { pointer: '/joints/r3-knee/values/currentLimit', to: 0.35 },
      { pointer: '/joints/l1-knee/values/currentLimit', to: 2.5 },
      { pointer: '/joints/r3-knee/values/velocityGain', from: 2.9, to: 3 },
    ])
    expect(block.counts.empty).toBe(1)
  })

  it('names cells that lie outside the table', () => {
    const last = columns[columns.length - 1]
    const wide = placeBlock([['1', '2']], { ...target('Velocity gain', 'family knee'), anchor: { row: rowNumber('Velocity gain'), column: columns.length - 1 } })
    expect(wide.rows[0].cells[1]).toMatchObject({ kind: 'bad', column: null, why: expect.stringContaining('wider than the table') })
    expect(wide.columns[0]).toBe(last)
    const long = placeBlock([['1'], ['2']], { ...target('Velocity gain', 'l1-knee'), anchor: { row: rows.length - 1, column: 1 } })
    expect(long.rows[1].cells[0]).toMatchObject({ kind: 'bad', why: expect.stringContaining('longer than the table') })
  })

  it('alters a set to what its good cells say', () => {
    const block = placeBlock(readBlock('3.5\n30\nx'), target('Velocity gain', 'r3-knee'))
    const next = applyEdits(set, editsOf(block))
    expect(next.joints['r3-knee'].values).toMatchObject({ velocityGain: 3.5, velocityIntegralGain: 30 })
    expect(Object.keys(next.joints['r3-knee'].values)).toHaveLength(2)
  })
})

describe('the rows and columns of the table', () => {
  it('are every family before its joints, and each role once, whatever a firmware line calls it', () => {
    expect(columns.map((c) => c.key)).toEqual(['family knee', 'l1-knee', 'r3-knee', 'family winch', 'winch'])
    const roles = rows.flatMap((r) => (r.role === null ? [] : [r.role]))
    expect(new Set(roles).size).toBe(roles.length)
    expect(cells.at(columns[columnNumber('winch')], rows[rowNumber('Velocity gain')])?.pointer).toMatch(/^\/joints\/winch\/values\//)
  })

  it('keeps the very cell whose figures did not alter', () => {
    const next = new TableCells({ set: applyEdits(set, [{ pointer: '/families/knee/values/velocityGain', from: 3.2, to: 3.4 }]), base: set, schemas }, cells)
    const [gain, limit] = [rows[rowNumber('Velocity gain')], rows[rowNumber('Current limit')]]
    cells.at(columns[1], limit)
    expect(next.at(columns[1], limit)).toBe(cells.at(columns[1], limit))
    expect(next.at(columns[1], gain)).toMatchObject({ value: 3.4, changed: true })
    expect(next.at(columns[2], gain)).toMatchObject({ value: 2.9, origin: 'joint' })
  })

  it('are narrowed to what is changed, out of policy, or from one origin', () => {
    const gain = rows[rowNumber('Velocity gain')]
    const limit = rows[rowNumber('Current limit')]
    const out = outOfPolicy([finding({ level: 'concession needed', kind: 'phase margin', loop: 'velocity', joints: ['l1-knee'], pointer: undefined })], set, schemas)
    const policy = (at: Parameters<typeof isOutOfPolicy>[1]) => isOutOfPolicy(out, at, set)
    const wanted = (filter: Parameters<typeof rowWanted>[0], row = gain, from = cells) => rowWanted(filter, columns, row, from, policy)
    expect(wanted({ showing: 'all', origin: null })).toBe(true)
    expect(wanted({ showing: 'changed', origin: null })).toBe(false)
    expect(wanted({ showing: 'changed', origin: null }, gain, new TableCells({ set: applyEdits(set, [{ pointer: '/joints/r3-knee/values/velocityGain', from: 2.9, to: 3 }]), base: set, schemas }))).toBe(true)
    expect(wanted({ showing: 'policy', origin: null })).toBe(true)
    expect(wanted({ showing: 'policy', origin: null }, limit)).toBe(false)
    expect(wanted({ showing: 'all', origin: 'joint' })).toBe(true)
    expect(wanted({ showing: 'all', origin: 'joint' }, limit)).toBe(false)
    // l1-knee inherits the gain that is outside policy, so the family's value is meant; r3-knee has its own
    expect(policy(cells.at(columns[0], gain))).toBe(true)
    expect(policy(cells.at(columns[2], gain))).toBe(false)
  })
})

describe('keys in the table', () => {
  const size = { rows: 10, columns: 5 }
  it('move inside its bounds, with Shift they select from where they began', () => {
    const a = gridState(startState, { kind: 'move', rows: 3, columns: 9, size })
    expect(a).toMatchObject({ row: 3, column: 4, fromRow: 3, fromColumn: 4, focus: 1 })
    const b = gridState(a, { kind: 'move', rows: 2, columns: -1, extend: true, size })
    expect(selectionOf(b)).toEqual({ top: 3, bottom: 5, left: 3, right: 4 })
    // the cell that a selection reached takes the focus; that keeps the selection, a press on it does not
    expect(gridState(b, { kind: 'choose', row: 5, column: 3 })).toBe(b)
    expect(selectionOf(gridState(b, { kind: 'choose', row: 5, column: 3, anew: true }))).toEqual({ top: 5, bottom: 5, left: 3, right: 3 })
    expect(selectionOf(gridState(b, { kind: 'move', rows: -1, columns: 0, size }))).toEqual({ top: 4, bottom: 4, left: 3, right: 3 })
  })

  it('leave the editor in the direction asked, and only a choice of another cell ends it', () => {
    const editing = gridState(gridState(startState, { kind: 'choose', row: 2, column: 1 }), { kind: 'begin', first: '4' })
    expect(gridState(editing, { kind: 'choose', row: 2, column: 1 })).toBe(editing)
    expect(gridState(editing, { kind: 'end', way: 'down', size })).toMatchObject({ row: 3, column: 1, editing: false })
    expect(gridState(editing, { kind: 'choose', row: 0, column: 0 })).toMatchObject({ editing: false, row: 0 })
  })
})

describe('columns in sight', () => {
  it('stand with the gaps between them, so that every column has its width', () => {
    expect(spansOf([0, 5, 6], 9)).toEqual([{ index: 0, gap: 0 }, { index: 5, gap: 4 }, { index: 6, gap: 0 }, { index: 9, gap: 2 }])
    fc.assert(fc.property(fc.integer({ min: 1, max: 60 }), fc.array(fc.nat(59)), (count, some) => {
      const drawn = [...new Set(some.filter((k) => k < count))].toSorted((a, b) => a - b)
      const spans = spansOf(drawn, count)
      expect(spans.reduce((n, s) => n + s.gap + (s.index < count ? 1 : 0), 0)).toBe(count)
    }), { seed: 20261201 })
  })
})
