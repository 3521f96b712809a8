import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { normalEmail } from './check-credentials.ts'
import { linkLetter } from './letters.ts'
import { Link } from './link.entity.ts'
import { makeLink } from './make-link.ts'
import { Person } from './person.entity.ts'

/** Links of one person that can be open at once by asking at the sign-in page: a stranger who asks again and again fills no mailbox. */
const mostOpenLinks = 3

/** Somebody who is not signed in asks for a new password. Tells nobody whether the address is known: who asks learns nothing here. */
export async function askReset(em: EntityManager, { email, baseUrl, now }: { email: string; baseUrl: string; now: Date }): Promise<void> {
  const person = await em.findOne(Person, { email: normalEmail(email), disabledAt: null }, { populate: ['passwordHash'], refresh: true })
  if (!person) return
  if ((await em.count(Link, { person, askedBy: null, usedAt: null, expiresAt: { $gt: now } })) >= mostOpenLinks) return
  const { address, link } = makeLink(em, { person, baseUrl, askedBy: null, now })
  queueMail(em, { person, ...linkLetter(person, link, address, null), secretLink: address, now })
  await appendEntry(em, { at: now, person: null, act: 'reset asked for', subject: { person: person.name }, details: { personId: person.id } })
}
