import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Change } from '../changes/change.entity.ts'
import { Person } from '../people/person.entity.ts'

/** An image of an unreleased change, taken for one board at one joint. Immutable. */
export const BenchImage = defineEntity({
  name: 'BenchImage',
  properties: {
    id: p.integer().primary(),
    change: () => p.manyToOne(Change),
    /** the joint's key */
    joint: p.string().length(40),
    /** the board's serial number */
    board: p.string().length(40).index(),
    /** of the raw image, release number 0 */
    imageSha256: p.string().length(64),
    person: () => p.manyToOne(Person),
    at: p.datetime(),
  },
})
export type BenchImage = InferEntity<typeof BenchImage>
