import type { EntityManager } from '@mikro-orm/core'
import { editsBetween } from '../../../shared/parameters/edits.ts'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { editText } from '../../../shared/parameters/set-text.ts'
import { conflictsBetween, laidOver, type Conflict, type Decision } from '../../../shared/parameters/three-way.ts'
import { DomainError } from '../../http/errors.ts'
import { newestRelease } from '../machines/current-release.ts'
import type { Person } from '../people/person.entity.ts'
import type { Release } from '../releases/release.entity.ts'
import { addEvent } from './add-event.ts'
import { rebase, returnToDraft, type Change } from './change.entity.ts'
import { setOf } from './read-set.ts'
import { mustWrite, saveDraftText } from './save-draft.ts'

/** The newer release a change has to be brought up to, with what it disagrees about; null when its base is the newest. */
export async function outOfDate(em: EntityManager, change: Change): Promise<{ newest: Release; conflicts: Conflict[] } | null> {
  const newest = await newestRelease(em, change.machine)
  if (!newest || newest.id === change.baseRelease?.id) return null
  return { newest, conflicts: conflictsBetween(change.baseRelease?.set ?? emptySet(), setOf(change.text), newest.set) }
}

/** Lays the draft over the newest release, each conflict as its writer decided. Signatures are void; the check runs again. */
export async function bringUpToDate(em: EntityManager, change: Change, decisions: readonly Decision[], { person, now }: { person: Person; now: Date }): Promise<void> {
  mustWrite(change, person)
  const state = await outOfDate(em, change)
  if (!state) throw new DomainError('wrong-state', 'This change is on the newest release already. Nothing was altered.')
  const open = state.conflicts.filter((c) => !decisions.some((d) => d.pointer === c.pointer))
  if (open.length > 0)
    throw new DomainError('value-conflict', `Decide ${open.length === 1 ? 'one more conflict' : `${open.length} more conflicts`} with release ${state.newest.version}. Nothing was altered.`, {
      fields: open.map((c) => ({ pointer: c.pointer, detail: 'is not decided' })),
      extra: { conflicts: open },
    })
  if (change.state !== 'draft') returnToDraft(change, now)
  const mine = setOf(change.text)
  const laid = laidOver(change.baseRelease?.set ?? emptySet(), mine, state.newest.set, decisions)
  await saveDraftText(em, change, editText(change.text, editsBetween(mine, laid)), { person, now })
  rebase(change, state.newest, now)
  await addEvent(em, change, { kind: 'brought up to date', person, at: now, note: `on release ${state.newest.version}`, details: { base: state.newest.version, decisions: [...decisions] } })
}
