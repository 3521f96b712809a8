import type { EntityManager } from '@mikro-orm/core'
import { ChooseMail, type MailChoices, type MailPage } from '../../../shared/contract/mail.ts'
import { Nothing } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type Place, type RouteSpec } from '../../http/route.ts'
import { readBefore } from '../ledger/page-query.ts'
import { chooseMail, presentChoices } from './choices.ts'
import { Mail } from './mail.entity.ts'
import { presentMail } from './present.ts'
import { retryMail } from './retry-mail.ts'

const pageSize = 100

async function theMail(em: EntityManager, params: Record<string, string>): Promise<Place & { found: Mail }> {
  const found = /^[1-9]\d{0,8}$/.test(params.mail) ? await em.findOne(Mail, { id: Number(params.mail) }, { populate: ['person'] }) : null
  if (!found) throw new DomainError('not-found', 'There is no such mail. Nothing was done; reload the list.')
  return { machine: null, subject: found.person ? { person: found.person.name } : {}, found }
}

export const mailRoutes: readonly RouteSpec[] = [
  route({ method: 'get', path: '/me/mail', summary: 'read which mails one wants', access: 'signed-in', handle: async ({ person }) => ({ body: presentChoices(person) }) }),
  route({
    method: 'put',
    path: '/me/mail',
    summary: 'choose which mails one wants',
    access: 'signed-in',
    body: ChooseMail,
    handle: ({ act, body, person, now }) => act(async (em) => ({ body: presentChoices(await chooseMail(em, person, body as MailChoices, now)) })),
  }),
  route({
    method: 'get',
    path: '/mail',
    query: { before: { description: 'mails before this number' } },
    summary: 'read the mail queue',
    access: 'keep mail',
    async handle({ em, query, services }) {
      const before = readBefore(query)
      const mails = await em.find(Mail, before === null ? {} : { id: { $lt: before } }, { populate: ['person'], orderBy: { id: 'desc' }, limit: pageSize + 1 })
      const shown = mails.slice(0, pageSize)
      const page: MailPage = { mails: shown.map((m) => presentMail(m, services.config)), next: mails.length > pageSize ? shown[pageSize - 1].id : null, total: await em.count(Mail) }
      return { body: page }
    },
  }),
  route({
    method: 'post',
    path: '/mail/:mail/retry',
    summary: 'send a mail again',
    access: 'keep mail',
    place: theMail,
    body: Nothing,
    handle: ({ act, place, person, now, services }) => act(async (em) => ({ body: presentMail(await retryMail(em, { mail: place.found, person, now }), services.config) })),
  }),
]
