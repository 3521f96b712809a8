import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { Person } from '../people/person.entity.ts'
import { addEvent } from './add-event.ts'
import { cancel, returnToDraft, type Change } from './change.entity.ts'
import { changeKey } from './locate.ts'
import { notOwn } from './permissions.ts'

interface Act {
  reason: string
  person: Person
  now: Date
}

/** Back to draft, with the reason; what was signed is void, and the writers are told. */
export async function returnChange(em: EntityManager, change: Change, { reason, person, now }: Act): Promise<void> {
  const own = notOwn(change, person)
  if (!own.allowed) throw new DomainError('own-work', `${own.why} Nothing was returned.`, { recorded: true })
  returnToDraft(change, now)
  await addEvent(em, change, { kind: 'returned', person, at: now, note: reason })
  for (const writer of await em.find(Person, { id: { $in: change.writers } }))
    queueMail(em, { person: writer, topic: 'return', subject: `Returned: ${change.machine.name} ${change.number}, ${change.title}`, text: `${person.name} returned change ${changeKey(change)}, "${change.title}".\n\nReason: ${reason}\n\nIt is a draft again; signatures on it are void.\n`, now })
}

/** Ends a change that will not be released. Its content stays readable. */
export async function cancelChange(em: EntityManager, change: Change, { reason, person, now }: Act): Promise<void> {
  if (change.author.id !== person.id) throw new DomainError('not-permitted', `Only its author, ${change.author.name}, cancels a change. Nothing was altered.`, { recorded: true })
  cancel(change, now)
  await addEvent(em, change, { kind: 'cancelled', person, at: now, note: reason })
}
