import type { EntityManager } from '@mikro-orm/core'
import { choosable, choosableTopics, type ChoosableTopic, type MailChoice, type MailChoices, type MailChoicesView, type MailTopic } from '../../../shared/contract/mail.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { Person } from '../people/person.entity.ts'

const isChoosable = (topic: MailTopic): topic is ChoosableTopic => Object.hasOwn(choosable, topic)

/** How a person wants mails of a topic; at once where there is no choice. */
export function choiceOf(person: Pick<Person, 'mailChoices'>, topic: MailTopic): MailChoice {
  if (!isChoosable(topic)) return 'at once'
  return person.mailChoices?.[topic] ?? choosable[topic].usual
}

export const presentChoices = (person: Pick<Person, 'mailChoices'>): MailChoicesView => Object.fromEntries(choosableTopics.map((t) => [t, choiceOf(person, t)])) as MailChoicesView

/** Takes up what a person chose about their own mails. What they choose as it is usual is not kept. */
export async function chooseMail(em: EntityManager, person: Person, chosen: MailChoices, now: Date): Promise<Person> {
  const fresh = await em.findOneOrFail(Person, { id: person.id }, { refresh: true })
  const all = { ...fresh.mailChoices, ...chosen }
  const kept = Object.fromEntries(Object.entries(all).filter(([topic, choice]) => choice !== choosable[topic as ChoosableTopic].usual)) as MailChoices
  fresh.mailChoices = Object.keys(kept).length > 0 ? kept : null
  await appendEntry(em, { at: now, person, act: 'mail chosen', subject: { person: person.name }, details: { ...chosen } })
  return fresh
}
