import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Release } from './release.entity.ts'

/**
 * What a release's kit is made again from, beside the images: its signed manifest. Immutable. Every other file is regenerated and must match
 * the manifest's SHA-256.
 */
export const ReleaseKit = defineEntity({
  name: 'ReleaseKit',
  properties: {
    id: p.integer().primary(),
    release: () => p.oneToOne(Release).owner(true),
    /** RFC 8785 form of the in-toto statement */
    manifest: p.text().lazy(true, false),
    manifestSha256: p.string().length(64),
    /** Ed25519, over the manifest */
    signature: p.uint8array().lazy(true, false),
    /** DSSE */
    envelope: p.text().lazy(true, false),
    /** Ed25519, over the list of sums */
    sumsSignature: p.uint8array().lazy(true, false),
    /** PEM, of the key that signed it */
    publicKey: p.text(),
    keyId: p.string().length(64).index(),
    /** size of the .zip as it was packed at release */
    zipBytes: p.integer(),
  },
})
export type ReleaseKit = InferEntity<typeof ReleaseKit>
