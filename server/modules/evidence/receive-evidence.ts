import type { EntityManager } from '@mikro-orm/core'
import type { LogLayout } from '../../../shared/contract/evidence.ts'
import { DomainError } from '../../http/errors.ts'
import type { Upload } from '../../http/receive-upload.ts'
import { lookAtLog } from '../../jobs/logs/look-at-log.ts'
import type { Change } from '../changes/change.entity.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { Person } from '../people/person.entity.ts'
import { Evidence } from './evidence.entity.ts'
import { subjectOf } from './locate.ts'
import { mustAttach } from './may-attach.ts'

/** How an uploaded log is laid out. @throws DomainError wrong-media-type for what is no table of numbers */
export function layoutOf(upload: Upload): LogLayout {
  const look = lookAtLog(upload.original!.head)
  if (look.kind === 'refused') throw new DomainError('wrong-media-type', `${look.message} Nothing was kept.`, { fields: [{ pointer: '/log', detail: look.message }] })
  return look.layout
}

export interface Receiving {
  machine: Machine
  change: Change | null
  joint: string
  upload: Upload
  layout: LogLayout
  person: Person
  now: Date
}

/** Notes an uploaded log whose file is kept already; it speaks for nothing until its columns are read. @throws DomainError wrong-state */
export async function receiveEvidence(em: EntityManager, { machine, change, joint, upload, layout, person, now }: Receiving): Promise<Evidence> {
  if (change) await mustAttach(em, change, person)
  const [last] = await em.find(Evidence, { machine }, { orderBy: { number: 'desc' }, limit: 1 })
  const { sha256, bytes } = upload.original!
  const evidence = em.create(Evidence, {
    machine, number: (last?.number ?? 0) + 1, jointKey: joint, change, name: upload.name, sha256, bytes, storedSha256: upload.file.sha256, storedBytes: upload.file.bytes, layout,
    uploadedBy: em.getReference(Person, person.id), uploadedByName: person.name, uploadedAt: now,
  })
  await em.flush()
  await appendEntry(em, { at: now, person, act: 'evidence uploaded', subject: subjectOf(evidence), details: { evidence: evidence.number, name: evidence.name, sha256, bytes, storedSha256: upload.file.sha256 } })
  return evidence
}
