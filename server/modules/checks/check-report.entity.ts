import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Change } from '../changes/change.entity.ts'
import type { PackedCheck } from './pack-check.ts'

/** A finished check, kept by the hash of everything it depends on: equal inputs are answered from here. Immutable. */
export const CheckReport = defineEntity({
  name: 'CheckReport',
  uniques: [{ properties: ['change', 'inputsHash'] }],
  properties: {
    id: p.integer().primary(),
    change: () => p.manyToOne(Change),
    inputsHash: p.string().length(64),
    result: p.json<PackedCheck>(),
    createdAt: p.datetime(),
  },
})
export type CheckReport = InferEntity<typeof CheckReport>
