import type { EntityManager } from '@mikro-orm/core'
import type { EvidenceSummary, EvidenceView } from '../../../shared/contract/evidence.ts'
import type { Allowed } from '../../../shared/contract/people.ts'
import type { Services } from '../../http/services.ts'
import { changeKey } from '../changes/locate.ts'
import { readSet } from '../changes/read-set.ts'
import { newestRelease } from '../machines/current-release.ts'
import type { Machine } from '../machines/machine.entity.ts'
import type { Person } from '../people/person.entity.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { proposeMapping } from './choose-mapping.ts'
import { Evidence, stateOf } from './evidence.entity.ts'
import { mayAttach } from './may-attach.ts'
import { mayRemove } from './may-remove.ts'
import { progressOf } from './readings.ts'

/** Name of a joint as the newest release has it, else as the log's change has it, else its key. */
async function namesOf(em: EntityManager, machine: Machine): Promise<(evidence: Evidence) => string> {
  const newest = await newestRelease(em, machine)
  return (evidence) => {
    const released = newest?.set.joints[evidence.jointKey]?.name
    if (released !== undefined) return released
    const read = evidence.change ? readSet(evidence.change.text) : null
    return (read?.ok ? read.set.joints[evidence.jointKey]?.name : undefined) ?? evidence.jointKey
  }
}

const summary = (evidence: Evidence, nameOf: (evidence: Evidence) => string): EvidenceSummary => ({
  number: evidence.number,
  machine: evidence.machine.key,
  joint: evidence.jointKey,
  jointName: nameOf(evidence),
  change: evidence.change ? changeKey(evidence.change) : null,
  name: evidence.name,
  sha256: evidence.sha256,
  bytes: evidence.bytes,
  uploadedBy: evidence.uploadedByName,
  uploadedAt: evidence.uploadedAt.toISOString(),
  state: stateOf(evidence),
  reading: evidence.reading ?? null,
})

/** The logs of a machine that were not removed, newest first; of one joint, or of one change. */
export async function presentEvidenceList(em: EntityManager, machine: Machine, { joint, change }: { joint?: string; change?: number }): Promise<EvidenceSummary[]> {
  const where = { machine, removedAt: null, ...(joint === undefined ? {} : { jointKey: joint }), ...(change === undefined ? {} : { change }) }
  const all = (await em.find(Evidence, where, { populate: ['machine', 'change', 'change.machine'], orderBy: { number: 'desc' }, limit: 500 })) as Evidence[]
  const nameOf = await namesOf(em, machine)
  return all.map((e) => summary(e, nameOf))
}

const first = (...answers: Allowed[]): Allowed => answers.find((a) => !a.allowed) ?? { allowed: true }

export async function presentEvidence(services: Services, em: EntityManager, evidence: Evidence, { person, held }: { person: Person; held: readonly HeldRole[] }): Promise<EvidenceView> {
  const proposed = evidence.mapping ? { mapping: evidence.mapping, from: null } : await proposeMapping(em, evidence.machine, evidence.layout)
  const role = may(held, 'upload evidence', evidence.machine.key)
  const state = stateOf(evidence)
  const unread: Allowed = state === 'received' ? { allowed: true } : { allowed: false, why: state === 'read' ? 'Its columns are read; upload the log again to read it otherwise.' : 'It was removed.' }
  const attach = evidence.change ? await mayAttach(em, evidence.change, person) : ({ allowed: true } as const)
  const read: Allowed = state === 'read' ? { allowed: true } : { allowed: false, why: state === 'removed' ? 'It was removed.' : 'Its columns are not read yet.' }
  return {
    ...summary(evidence, await namesOf(em, evidence.machine)),
    machineName: evidence.machine.name,
    storedBytes: evidence.storedBytes,
    storedSha256: evidence.storedSha256,
    layout: evidence.layout,
    mapping: proposed.mapping,
    mappingFrom: proposed.from,
    progress: progressOf(services, evidence),
    readAt: evidence.readAt?.toISOString() ?? null,
    removedAt: evidence.removedAt?.toISOString() ?? null,
    removedBy: evidence.removedByName ?? null,
    may: { read: first(unread, role, attach), remove: first(role, await mayRemove(em, evidence, person)), use: first(read, may(held, 'draft changes', evidence.machine.key)) },
  }
}
