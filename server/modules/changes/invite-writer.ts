import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { heldRoles } from '../people/held-roles.ts'
import { may } from '../people/permissions.ts'
import { Person } from '../people/person.entity.ts'
import { addEvent } from './add-event.ts'
import { admitWriter, type Change } from './change.entity.ts'
import { mustWrite } from './save-draft.ts'

/** Lets another controls engineer write in a draft. From then on they are a co-author, and sign nothing of it. */
export async function inviteWriter(em: EntityManager, change: Change, personId: number, { person, now }: { person: Person; now: Date }): Promise<void> {
  mustWrite(change, person)
  const invited = await em.findOne(Person, { id: personId, disabledAt: null })
  if (!invited || !may(await heldRoles(em, invited), 'draft changes', change.machine.key).allowed)
    throw new DomainError('invalid-request', `Only a controls engineer of ${change.machine.name} can be invited to write. Nobody was invited.`, { fields: [{ pointer: '/person', detail: 'holds no role to draft changes on this machine' }] })
  admitWriter(change, invited, now)
  await addEvent(em, change, { kind: 'writer invited', person, at: now, note: invited.name })
}
