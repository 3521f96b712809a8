import type { EntityManager } from '@mikro-orm/core'
import type { Allowed } from '../../../shared/contract/people.ts'
import type { MachinePolicyView, PolicyView } from '../../../shared/contract/policy.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import { stateOf, PolicyVersion } from './policy-version.entity.ts'

interface Reader {
  person: Person
  held: readonly HeldRole[]
}

const refuse = (why: string): Allowed => ({ allowed: false, why })

/** Who may decline: who may sign it, and its author, who takes it back. */
export const mayDecline = (version: PolicyVersion, { person, held }: Reader): Allowed => (version.author?.id === person.id ? { allowed: true } : may(held, 'sign policy', version.machine.key))

function maySign(version: PolicyVersion, { person, held }: Reader): Allowed {
  if (version.author?.id === person.id) return refuse('You proposed it: another release manager signs it.')
  return may(held, 'sign policy', version.machine.key)
}

export function presentPolicy(version: PolicyVersion, inForce: number, reader: Reader): PolicyView {
  const state = stateOf(version)
  const open = state === 'proposed' ? null : refuse('It does not wait for a signature.')
  return {
    machine: version.machine.key,
    number: version.number,
    state: state === 'signed' ? (version.number === inForce ? 'in force' : 'superseded') : state,
    content: version.content,
    reason: version.reason,
    author: version.author?.name ?? null,
    proposedAt: version.proposedAt.toISOString(),
    signedBy: version.signedBy?.name ?? null,
    signedAt: version.signedAt?.toISOString() ?? null,
    may: { sign: open ?? maySign(version, reader), decline: open ?? mayDecline(version, reader) },
  }
}

/** @throws Error when the machine was made without a policy */
export async function presentMachinePolicy(em: EntityManager, machine: Machine, reader: Reader): Promise<MachinePolicyView> {
  const all = await em.find(PolicyVersion, { machine }, { populate: ['author', 'signedBy', 'machine'], orderBy: { number: 'desc' } })
  const inForce = all.find((v) => stateOf(v) === 'signed')
  if (!inForce) throw new Error(`${machine.key} has no policy in force`)
  const versions = all.map((v) => presentPolicy(v, inForce.number, reader))
  const open = all.find((v) => stateOf(v) === 'proposed')
  const propose = may(reader.held, 'propose policy', machine.key)
  return {
    machine: machine.key,
    machineName: machine.name,
    inForce: versions.find((v) => v.state === 'in force')!,
    versions,
    may: { propose: propose.allowed && open ? refuse(`Version ${open.number} waits for a signature.`) : propose },
  }
}
