import type { EntityManager } from '@mikro-orm/core'
import { conflictsWith, editsBetween, type Edit } from '../../../shared/parameters/edits.ts'
import { editText } from '../../../shared/parameters/set-text.ts'
import { valueAt, withValueAt } from '../../../shared/parameters/paths.ts'
import { DomainError } from '../../http/errors.ts'
import { Person } from '../people/person.entity.ts'
import { saveText, type Change } from './change.entity.ts'
import { DraftPoint } from './draft-point.entity.ts'
import { setOf } from './read-set.ts'

interface Saving {
  person: Person
  now: Date
}

/** @throws DomainError not-permitted when the person is neither author nor invited */
export function mustWrite(change: Change, person: Person) {
  if (!change.writers.includes(person.id))
    throw new DomainError('not-permitted', `Only its author and the people invited write in change ${change.number}. Nothing was saved; ask ${change.author.name} to invite you.`, { recorded: true })
}

/** Saves a text as it is; every save that alters something is a draft point. */
export async function saveDraftText(em: EntityManager, change: Change, text: string, { person, now }: Saving): Promise<{ edits: Edit[] }> {
  mustWrite(change, person)
  const edits = editsBetween(setOf(change.text), setOf(text))
  if (text === change.text) return { edits }
  const [last] = await em.find(DraftPoint, { change }, { orderBy: { number: 'desc' }, limit: 1 })
  saveText(change, text, now)
  em.create(DraftPoint, { change, number: (last?.number ?? 0) + 1, by: em.getReference(Person, person.id), at: now, text, edits })
  await em.flush()
  return { edits }
}

/**
 * Saves edits of single values. Each edit says what its writer saw in its place; where another value stands there by now, all of them are
 * refused with what stands there, so that nobody overwrites unseen.
 *
 * @throws DomainError value-conflict, content-invalid
 */
export async function saveEdits(em: EntityManager, change: Change, edits: readonly Edit[], saving: Saving): Promise<void> {
  mustWrite(change, saving.person)
  const set = setOf(change.text)
  const conflicts = conflictsWith(set, edits)
  if (conflicts.length > 0)
    throw new DomainError('value-conflict', `Another value was saved in ${conflicts.length === 1 ? 'this place' : `${conflicts.length} of these places`} while you typed. Nothing of yours was saved; choose which one stays.`, {
      fields: conflicts.map((c) => ({ pointer: c.edit.pointer, detail: c.now === undefined ? 'nothing stands there any more' : `${JSON.stringify(c.now)} stands there now` })),
      extra: { conflicts: conflicts.map((c) => ({ pointer: c.edit.pointer, yours: c.edit.to ?? null, now: c.now ?? null })) },
    })
  await saveDraftText(em, change, editText(change.text, applicable(set, edits)), saving)
}

/** The edits that alter something, each with a parent to live in. */
function applicable(set: ReturnType<typeof setOf>, edits: readonly Edit[]): Edit[] {
  let here = set
  return edits.filter((e) => {
    if (e.to === undefined && valueAt(here, e.pointer) === undefined) return false
    try {
      here = withValueAt(here, e.pointer, e.to)
      return true
    } catch (error) {
      throw new DomainError('content-invalid', 'One of these values has no place to stand in. Nothing was saved.', { fields: [{ pointer: e.pointer, detail: (error as Error).message }] })
    }
  })
}

/** Goes back to a draft point; the way back is a draft point too, so that nothing is lost. */
export async function goBackTo(em: EntityManager, change: Change, number: number, saving: Saving): Promise<void> {
  const point = await em.findOne(DraftPoint, { change, number }, { populate: ['text'] })
  if (!point) throw new DomainError('not-found', `Change ${change.number} has no draft point ${number}. Nothing was altered.`)
  await saveDraftText(em, change, point.text, saving)
}
