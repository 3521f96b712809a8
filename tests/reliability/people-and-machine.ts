import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import type { Services } from '../../server/http/services.ts'
import { makeMachine } from '../../server/modules/machines/make-machine.ts'
import { FirmwareLine } from '../../server/modules/firmware/firmware-line.entity.ts'
import { FirmwareVersion } from '../../server/modules/firmware/firmware-version.entity.ts'
import { hashOf } from '../../server/modules/firmware/schema-cache.ts'
import { hashPassword } from '../../server/modules/people/passwords.ts'
import { Person } from '../../server/modules/people/person.entity.ts'
import { RoleGrant } from '../../server/modules/people/role-grant.entity.ts'
import type { Role } from '../../shared/contract/people.ts'
import { projectRoot } from '../../server/project-root.ts'

export const emailOf = (name: string) => `${name}@dunlin.example`

/** Who takes part: one for each side of the two-person rule, and one whose firmware it is. */
const people: Record<string, Role[]> = { author: ['controls engineer'], reviewer: ['peer reviewer'], manager: ['release manager'], deputy: ['release manager'], keeper: ['administrator'], smith: ['controls engineer'] }

/** People with roles on all machines, the machine "dunlin", firmware published, and a draft of its next version without an image. */
export async function makePeopleAndMachine({ orm, now }: Services, password: string): Promise<void> {
  const passwordHash = await hashPassword(password)
  const at = now()
  await orm.em.fork().transactional(async (em) => {
    const made: Record<string, Person> = {}
    for (const [name, roles] of Object.entries(people)) {
      made[name] = em.create(Person, { name, email: emailOf(name), passwordHash, createdAt: at })
      for (const role of roles) em.create(RoleGrant, { person: made[name], role, machine: null, grantedAt: at, confirmedAt: at })
    }
    await em.flush()
    await makeMachine(em, { key: 'dunlin', name: 'Dunlin', description: 'mud-flat survey walker', person: made.keeper, now: at })
    const line = em.create(FirmwareLine, { key: 'hinge', name: 'Hinge', description: '', createdAt: at })
    const schemaText = readFileSync(join(projectRoot(), 'examples', 'firmware', 'hinge-2.1.0.schema.json'), 'utf8')
    const schemaHash = hashOf(JSON.parse(schemaText) as object)
    const version = (number: string, published: boolean) =>
      em.create(FirmwareVersion, { line, version: number, state: published ? 'published' : 'draft', schemaText, schemaHash, notes: '', uploadedBy: made.smith, writers: [made.smith.id], createdAt: at, publishedBy: published ? made.keeper : null, publishedAt: published ? at : null })
    version('2.1.0', true)
    version('2.2.0', false)
  })
}
