import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { ColumnMapping, LogLayout, LogReading } from '../../../shared/contract/evidence.ts'
import { DomainError } from '../../http/errors.ts'
import { Change } from '../changes/change.entity.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Person } from '../people/person.entity.ts'

/** An uploaded bench log of one joint, attached to a change where it speaks for one. Its files lie in the store. */
export const Evidence = defineEntity({
  name: 'Evidence',
  uniques: [{ properties: ['machine', 'number'] }],
  properties: {
    id: p.integer().primary(),
    machine: () => p.manyToOne(Machine),
    number: p.integer(),
    /** a key, since a draft may speak of joints that no release has yet */
    jointKey: p.string().length(40).index(),
    change: () => p.manyToOne(Change).nullable().index(),
    name: p.string().length(120),
    /** of the file as it was sent */
    sha256: p.string().length(64),
    bytes: p.integer(),
    /** of the same, gzipped, as it lies in the store */
    storedSha256: p.string().length(64),
    storedBytes: p.integer(),
    layout: p.json<LogLayout>(),
    mapping: p.json<ColumnMapping[]>().nullable(),
    reading: p.json<LogReading>().nullable(),
    /** the columns in SI, as read; null until then */
    columnsSha256: p.string().length(64).nullable(),
    uploadedBy: () => p.manyToOne(Person),
    uploadedByName: p.string().length(120),
    uploadedAt: p.datetime(),
    readAt: p.datetime().nullable(),
    removedAt: p.datetime().nullable(),
    removedByName: p.string().length(120).nullable(),
  },
})
export type Evidence = InferEntity<typeof Evidence>

export const stateOf = (evidence: Evidence): 'received' | 'read' | 'removed' => (evidence.removedAt ? 'removed' : evidence.readAt ? 'read' : 'received')

export interface ReadOutcome {
  mapping: ColumnMapping[]
  reading: LogReading
  columnsSha256: string
}

/** Its columns are read: from here on it is evidence. */
export function markRead(evidence: Evidence, outcome: ReadOutcome, now: Date) {
  mustStand(evidence, 'read')
  Object.assign(evidence, { ...outcome, readAt: now })
}

export function remove(evidence: Evidence, by: string, now: Date) {
  mustStand(evidence, 'removed again')
  Object.assign(evidence, { removedAt: now, removedByName: by })
}

/** @throws DomainError wrong-state for what was removed */
export function mustStand(evidence: Evidence, act: string) {
  if (evidence.removedAt) throw new DomainError('wrong-state', `${evidence.name} was removed; it can't be ${act}. Nothing was altered.`)
}
