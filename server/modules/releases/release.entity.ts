import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { VersionStep } from '../../../shared/contract/releases.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Person } from '../people/person.entity.ts'

/** An immutable, versioned set of revisions for every joint of a machine. */
export const Release = defineEntity({
  name: 'Release',
  uniques: [{ properties: ['machine', 'version'] }, { properties: ['machine', 'sequence'] }],
  properties: {
    id: p.integer().primary(),
    machine: () => p.manyToOne(Machine),
    version: p.string().length(60),
    /** written into the boards' release register; only grows */
    sequence: p.integer(),
    changeNumber: p.integer(),
    changeTitle: p.string().length(120),
    reason: p.text(),
    set: p.json<MachineSet>(),
    /** what the signatures bind to */
    contentHash: p.string().length(64).index(),
    /** the content itself in RFC 8785 form, so that the hash can be computed again by anyone */
    content: p.text().lazy(true, false),
    proposedStep: p.string().$type<VersionStep>(),
    step: p.string().$type<VersionStep>(),
    stepReason: p.text(),
    releasedBy: () => p.manyToOne(Person),
    releasedAt: p.datetime(),
  },
})
export type Release = InferEntity<typeof Release>
