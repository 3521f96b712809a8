import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { freshPerson } from './find-person.ts'
import { enabledLetter } from './letters.ts'
import { enable, type Person } from './person.entity.ts'

/** Gives a disabled person their access back, with the password and roles they had. @throws DomainError wrong-state */
export async function enablePerson(em: EntityManager, { whom, person: by, now }: { whom: Person; person: Person; now: Date }): Promise<void> {
  const person = await freshPerson(em, whom)
  enable(person)
  queueMail(em, { person, ...enabledLetter(person, by), now })
  await appendEntry(em, { at: now, person: by, act: 'person enabled', subject: { person: person.name }, details: { personId: person.id } })
}
