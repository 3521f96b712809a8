import type { EntityManager } from '@mikro-orm/core'
import { logSignals, unitProblem, type ColumnMapping, type LogLayout } from '../../../shared/contract/evidence.ts'
import { DomainError, type FieldProblem } from '../../http/errors.ts'
import { guessMapping } from '../../jobs/logs/look-at-log.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { Evidence } from './evidence.entity.ts'

/** Logs of a machine that are asked for their columns, newest first. */
const remembered = 50

/** What was chosen for the machine's newest log with columns of these names; else a guess. Units that this log states itself stand before those remembered. */
export async function proposeMapping(em: EntityManager, machine: Machine, layout: LogLayout): Promise<{ mapping: ColumnMapping[]; from: number | null }> {
  const before = await em.find(Evidence, { machine, readAt: { $ne: null } }, { orderBy: { number: 'desc' }, limit: remembered })
  const place = new Map(layout.columns.map((c, k) => [c.name, k]))
  for (const log of before) {
    const names = (log.mapping ?? []).map((m) => log.layout.columns[m.column]?.name)
    if (names.length === 0 || !names.every((n) => n !== undefined && place.has(n))) continue
    const mapping = log.mapping!.map((m, k) => {
      const column = place.get(names[k])!
      const stated = layout.columns[column].unit
      return { ...m, column, unit: stated && unitProblem(m.signal, stated) === null ? stated : m.unit }
    })
    return { mapping, from: log.number }
  }
  return { mapping: guessMapping(layout.columns), from: null }
}

/** @throws DomainError invalid-request with every field that does not fit */
export function mustFit(mapping: readonly ColumnMapping[], layout: LogLayout): void {
  const fields: FieldProblem[] = []
  mapping.forEach((m, k) => {
    const problem = unitProblem(m.signal, m.unit)
    if (problem) fields.push({ pointer: `/mapping/${k}/unit`, detail: problem })
    if (m.column >= layout.columns.length) fields.push({ pointer: `/mapping/${k}/column`, detail: `is none of the log's ${layout.columns.length} columns` })
    if (mapping.findIndex((o) => o.signal === m.signal) < k) fields.push({ pointer: `/mapping/${k}/signal`, detail: `${m.signal} is taken by another column already` })
    if (mapping.findIndex((o) => o.column === m.column) < k) fields.push({ pointer: `/mapping/${k}/column`, detail: 'is in use for another signal already' })
  })
  for (const signal of logSignals.filter((s) => s === 'time' || s === 'current')) if (!mapping.some((m) => m.signal === signal)) fields.push({ pointer: '/mapping', detail: `says no column of the ${signal}, which every log needs` })
  if (fields.length > 0) throw new DomainError('invalid-request', 'The columns as chosen do not fit. Nothing was read; the log is kept as it was sent.', { fields })
}
