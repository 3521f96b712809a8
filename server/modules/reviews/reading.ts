import type { EntityManager } from '@mikro-orm/core'
import type { DiffView, Marked, ReadingView } from '../../../shared/contract/reviews.ts'
import type { Allowed } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import type { Change } from '../changes/change.entity.ts'
import { inState, notOwn } from '../changes/permissions.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import { diffChange, rowsOf } from './diff-change.ts'
import { ReadMark } from './read-mark.entity.ts'

const nameOf = (row: Pick<ReadMark, 'row' | 'rowHash'>) => `${row.row} ${row.rowHash}`
const nameOfRow = ({ key, hash }: Marked) => `${key} ${hash}`

/** Who reads to sign: a holder of a signing role on the machine who took no part, while there is something to sign. */
function mayMark(change: Change, person: Person, held: readonly HeldRole[]): Allowed {
  for (const answer of [may(held, 'return changes', change.machine.key), notOwn(change, person), inState(change, 'submitted', 'approved')]) if (!answer.allowed) return answer
  return { allowed: true }
}

/** How far everybody is with the rows as they stand now. */
export async function presentReading(em: EntityManager, change: Change, person: Person, held: readonly HeldRole[]): Promise<ReadingView> {
  const rows = rowsOf(await diffChange(em, change))
  const keys = new Map(rows.map((r) => [nameOfRow(r), r.key]))
  const marks = (await em.find(ReadMark, { change }, { populate: ['person'], orderBy: { id: 'asc' } })).filter((m) => keys.has(nameOf(m)))
  const people = [...new Map(marks.map((m) => [m.person.id, m.person.name]))].map(([id, name]) => ({ name, read: marks.filter((m) => m.person.id === id).length }))
  return { read: marks.filter((m) => m.person.id === person.id).map((m) => m.row), rows: rows.length, people, may: { mark: mayMark(change, person, held) } }
}

interface Marking {
  person: Person
  held: readonly HeldRole[]
  now: Date
}

function mustMark(change: Change, { person, held }: Marking) {
  const answer = mayMark(change, person, held)
  if (!answer.allowed) throw new DomainError(change.writers.includes(person.id) ? 'own-work' : 'wrong-state', `${answer.why} Nothing was marked.`)
}

/**
 * Marks rows as read by somebody who may sign, each as they saw it.
 *
 * @throws DomainError content-differs when a row says something else by now, or is gone
 */
export async function markRead(em: EntityManager, change: Change, rows: readonly Pick<Marked, 'key' | 'hash'>[], marking: Marking): Promise<void> {
  mustMark(change, marking)
  const now = new Map(rowsOf(await diffChange(em, change)).map((r) => [r.key, r]))
  const other = rows.filter((r) => now.get(r.key)?.hash !== r.hash)
  if (other.length > 0)
    throw new DomainError('content-differs', `${other.length === 1 ? 'One row says' : `${other.length} rows say`} something else by now. Nothing was marked; reload, and read what is new.`, { fields: other.slice(0, 50).map((r) => ({ pointer: now.get(r.key)?.pointer ?? '', detail: `${r.key} is not what you read` })) })
  const { person } = marking
  const known = new Set((await em.find(ReadMark, { change, person })).map(nameOf))
  const fresh = [...new Map(rows.map((r) => [r.key, r])).values()].filter((r) => !known.has(`${r.key} ${r.hash}`))
  if (fresh.length > 0) await em.insertMany(ReadMark, fresh.map((r) => ({ change: change.id, person: person.id, round: change.round, row: r.key, rowHash: r.hash, at: marking.now })) as never)
}

/** Takes the mark off a row: it is to be read again. */
export async function unmarkRead(em: EntityManager, change: Change, row: string, marking: Marking): Promise<void> {
  mustMark(change, marking)
  await em.nativeDelete(ReadMark, { change, person: marking.person, row })
}

/** @returns rows that this person has not marked as read, and how many there are */
export async function unreadBy(em: EntityManager, change: Change, person: Person): Promise<{ unread: Marked[]; diff: DiffView }> {
  const diff = await diffChange(em, change)
  const known = new Set((await em.find(ReadMark, { change, person })).map(nameOf))
  return { unread: rowsOf(diff).filter((r) => !known.has(nameOfRow(r))), diff }
}
