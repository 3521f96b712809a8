import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { RevisionContent } from '../../../shared/contract/releases.ts'
import { Joint } from '../machines/joint.entity.ts'

/** An immutable, numbered, content-hashed state of a joint's parameter set. */
export const Revision = defineEntity({
  name: 'Revision',
  uniques: [{ properties: ['joint', 'number'] }],
  properties: {
    id: p.integer().primary(),
    joint: () => p.manyToOne(Joint),
    number: p.integer(),
    content: p.json<RevisionContent>(),
    contentHash: p.string().length(64).index(),
    createdAt: p.datetime(),
  },
})
export type Revision = InferEntity<typeof Revision>
