import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Joint } from '../machines/joint.entity.ts'
import { Release } from './release.entity.ts'
import { Revision } from './revision.entity.ts'

/** A joint of a release: its revision and the very bytes for its board. Immutable. */
export const ReleaseJoint = defineEntity({
  name: 'ReleaseJoint',
  uniques: [{ properties: ['release', 'joint'] }],
  properties: {
    id: p.integer().primary(),
    release: () => p.manyToOne(Release),
    joint: () => p.manyToOne(Joint),
    revision: () => p.manyToOne(Revision),
    image: p.uint8array().lazy(true, false),
    imageSha256: p.string().length(64).index(),
  },
})
export type ReleaseJoint = InferEntity<typeof ReleaseJoint>
