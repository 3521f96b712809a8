import type { EntityManager } from '@mikro-orm/core'
import { queueMail } from '../mail/queue-mail.ts'
import { heldRoles } from '../people/held-roles.ts'
import { may } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import { RoleGrant } from '../people/role-grant.entity.ts'
import type { Change } from './change.entity.ts'
import { changeKey } from './locate.ts'

const parts = {
  'sign peer review': { role: 'peer reviewer', subject: 'To read and sign', told: (by: string, what: string) => `${by} submitted ${what}. It waits for a peer review.` },
  'sign release': { role: 'release manager', subject: 'To release', told: (by: string, what: string) => `${by} signed ${what}; the peer reviews that policy asks for are there. It waits for its release.` },
} as const

interface Telling {
  act: keyof typeof parts
  by: Person
  baseUrl: string
  now: Date
}

/** Mails everybody whose signature a change waits for: who may sign it, and took no part in it. */
export async function tellSigners(em: EntityManager, change: Change, { act, by, baseUrl, now }: Telling): Promise<void> {
  const { role, subject, told } = parts[act]
  const grants = await em.find(RoleGrant, { role, endedAt: null, $or: [{ machine: null }, { machine: change.machine }], person: { disabledAt: null, id: { $nin: [...change.writers, by.id] } } }, { populate: ['person'], orderBy: { id: 'asc' } })
  const people = [...new Map(grants.map((g) => [g.person.id, g.person as Person])).values()]
  const key = changeKey(change)
  for (const person of people) {
    if (!may(await heldRoles(em, person), act, change.machine.key).allowed) continue
    const text = [`${person.name},`, '', told(by.name, `change ${key} of ${change.machine.name}, "${change.title}"`), '', change.reason.trim(), '', `Read it at ${baseUrl}/changes/${key}/review`, '', 'Detent', ''].join('\n')
    queueMail(em, { person, topic: 'waiting', subject: `${subject}: ${change.machine.name} ${change.number}, ${change.title}`, text, now })
  }
}
