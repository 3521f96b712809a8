import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { DriveTrain as Settings } from '../../../shared/parameters/machine-set.ts'
import { Family } from './family.entity.ts'

/** One released state of a family's drive train, numbered within the family. Immutable. */
export const DriveTrain = defineEntity({
  name: 'DriveTrain',
  uniques: [{ properties: ['family', 'number'] }],
  properties: {
    id: p.integer().primary(),
    family: () => p.manyToOne(Family),
    number: p.integer(),
    settings: p.json<Settings>(),
    contentHash: p.string().length(64),
    createdAt: p.datetime(),
  },
})
export type DriveTrain = InferEntity<typeof DriveTrain>
