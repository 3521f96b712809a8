import type { EntityManager } from '@mikro-orm/core'
import { digestHour } from '../../../shared/contract/mail.ts'
import type { Services } from '../../http/services.ts'
import { Mail } from './mail.entity.ts'

/** The next moment at which digests go out, after this one; by the server's clock. */
export function nextDigest(now: Date): Date {
  const at = new Date(now)
  at.setHours(digestHour, 0, 0, 0)
  if (at <= now) at.setDate(at.getDate() + 1)
  return at
}

const oneDigest = (mails: readonly Mail[]) => ({
  subject: mails.length === 1 ? mails[0].subject : `Detent: ${mails.length} notices since your last digest`,
  text: mails.length === 1 ? mails[0].text : `${mails.map((m) => `${m.subject}\n\n${m.text.trim()}`).join('\n\n----\n\n')}\n\n----\n\nWhich of these come at once, once a day or not at all is yours to choose on your account page.\n`,
})

async function gatherFor(em: EntityManager, mails: Mail[], now: Date) {
  const [{ person, to }] = mails
  // Whoever was disabled meanwhile is told of nothing more.
  if (!person?.disabledAt) em.create(Mail, { person, to, ...oneDigest(mails), topic: 'digest', secretLink: null, state: 'queued', attempts: 0, createdAt: now, nextAttemptAt: now })
  for (const mail of mails) Object.assign(mail, { state: 'gathered', sentAt: now })
}

/** Puts the held mails that are due into one mail a person. @returns how many digests were queued */
export async function gatherDigests(services: Services): Promise<number> {
  const now = services.now()
  return services.orm.em.fork().transactional(async (em) => {
    const due = await em.find(Mail, { state: 'held', nextAttemptAt: { $lte: now } }, { populate: ['person'], orderBy: { id: 'asc' } })
    const byPerson = new Map<number | string, Mail[]>()
    for (const mail of due as Mail[]) {
      const whose = mail.person?.id ?? mail.to
      byPerson.set(whose, [...(byPerson.get(whose) ?? []), mail])
    }
    for (const mails of byPerson.values()) await gatherFor(em, mails, now)
    return byPerson.size
  })
}
