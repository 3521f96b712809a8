import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Person } from '../people/person.entity.ts'

/**
 * The public half of a key that the workplace signs its kits with. Immutable: an old kit is proven with the key of its day, so none is
 * ever taken away. A key holds until the next one begins.
 */
export const WorkplaceKey = defineEntity({
  name: 'WorkplaceKey',
  properties: {
    id: p.integer().primary(),
    /** SHA-256 of its DER form, as openssl and sha256sum give it */
    keyId: p.string().length(64).unique(),
    /** PEM, SubjectPublicKeyInfo */
    publicKey: p.text(),
    from: p.datetime(),
    /** who rotated to it; null where the program made it */
    madeBy: () => p.manyToOne(Person).nullable(),
  },
})
export type WorkplaceKey = InferEntity<typeof WorkplaceKey>
