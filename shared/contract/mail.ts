import { Type, type Static } from '@sinclair/typebox'
import type { Allowed } from './people.ts'

/**
 * What a mail is about. Those of one's account and of a withdrawn release that one flashed come at once, whatever was chosen: a link that
 * runs out and a danger at the bench wait for no digest.
 */
export const mailTopics = ['account', 'digest', 'withdrawal', 'waiting', 'return', 'release', 'named', 'firmware', 'policy', 'workplace'] as const
export type MailTopic = (typeof mailTopics)[number]

/** The topics that a person may choose about, in words, with what is usual. */
export const choosable = {
  waiting: { title: 'a change waits for your signature', usual: 'at once' },
  return: { title: 'a change of yours was returned', usual: 'at once' },
  release: { title: 'a change of yours was released', usual: 'at once' },
  named: { title: 'a comment names you', usual: 'at once' },
  firmware: { title: 'firmware that you wrote was published or retired', usual: 'at once' },
  policy: { title: 'a policy waits for you, or yours was decided', usual: 'at once' },
  workplace: { title: 'backups and keys of the workplace', usual: 'at once' },
} as const satisfies Partial<Record<MailTopic, { title: string; usual: MailChoice }>>
export type ChoosableTopic = keyof typeof choosable
export const choosableTopics = Object.keys(choosable) as ChoosableTopic[]

export const MailChoice = Type.Union([Type.Literal('at once'), Type.Literal('daily digest'), Type.Literal('not')])
export type MailChoice = Static<typeof MailChoice>
export type MailChoices = Partial<Record<ChoosableTopic, MailChoice>>
export const ChooseMail = Type.Object(Object.fromEntries(choosableTopics.map((t) => [t, Type.Optional(MailChoice)])), { additionalProperties: false, minProperties: 1 })

/** Every choosable topic with what holds for the person. */
export type MailChoicesView = Record<ChoosableTopic, MailChoice>

/** Hour of the server's clock at which the day's digests go out. */
export const digestHour = 7

/** `held`: waits for the day's digest; `gathered`: went out in one. */
export type MailState = 'queued' | 'sent' | 'failed' | 'held' | 'gathered'

export interface MailView {
  id: number
  to: string
  person: string | null
  subject: string
  /** single-use links masked outside demo mode */
  text: string
  state: MailState
  topic: MailTopic
  attempts: number
  createdAt: string
  sentAt: string | null
  lastError: string | null
  may: { retry: Allowed }
}

export interface MailPage {
  mails: MailView[]
  /** id to ask before for the next page; null at the end */
  next: number | null
  total: number
}
