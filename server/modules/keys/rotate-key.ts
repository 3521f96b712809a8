import type { KeyObject } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import type { Person } from '../people/person.entity.ts'
import { RoleGrant } from '../people/role-grant.entity.ts'
import { keepPublicKey, newestKey } from './workplace-keys.ts'

interface Rotation {
  next: KeyObject
  /** the key that the person saw in use */
  replaces: string
  person: Person
  now: Date
}

/** Those who sign releases or keep the workplace: whoever proves a kit asks them for the key's name. */
async function concerned(em: EntityManager): Promise<Person[]> {
  const grants = await em.find(RoleGrant, { role: { $in: ['administrator', 'release manager'] }, endedAt: null }, { populate: ['person'] })
  return [...new Map(grants.map((g) => [g.person.id, g.person])).values()].filter((p) => !p.disabledAt)
}

/**
 * Signs from now on with another key. What was signed before stays provable: the old public key is kept.
 *
 * @throws DomainError content-differs when the key was rotated meanwhile
 */
export async function rotateKey(em: EntityManager, { next, replaces, person, now }: Rotation): Promise<void> {
  const before = await newestKey(em)
  if (before?.keyId !== replaces) throw new DomainError('content-differs', 'Another key is in use by now. Nothing was rotated; reload and look at the keys again.', { fields: [{ pointer: '/keyId', detail: 'is not the key in use' }] })
  const key = keepPublicKey(em, next, { from: now, person })
  await appendEntry(em, { at: now, person, act: 'workplace key rotated', details: { keyId: key.keyId, replaces } })
  for (const reader of await concerned(em))
    queueMail(em, { person: reader, topic: 'workplace', subject: 'The workplace signs kits with another key', text: `${person.name} rotated the workplace's key. Kits of releases made from now on prove themselves with the public key\n\n${key.keyId}\n\nand kits made before with the key they were signed with,\n\n${replaces}\n\nfor the last ones. Both stay on the keys page. Tell whoever checks kits outside Detent.\n`, now })
}
