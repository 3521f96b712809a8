import { Type, type Static } from '@sinclair/typebox'
import type { Allowed } from './people.ts'

/** Rotating re-enters the password over the key that is replaced. */
export const RotateKey = Type.Object({ password: Type.String({ minLength: 1, maxLength: 200 }), keyId: Type.String({ pattern: '^[0-9a-f]{64}$' }) }, { additionalProperties: false })
export type RotateKey = Static<typeof RotateKey>

/** The public half of a key that the workplace signs its kits with. */
export interface WorkplaceKeyView {
  /** SHA-256 of its DER form, as `openssl pkey -pubin -outform DER | sha256sum` gives it */
  keyId: string
  /** PEM */
  publicKey: string
  from: string
  /** null while it is in use */
  until: string | null
  madeBy: string | null
  /** releases whose kits it signed */
  releases: number
}

export interface WorkplaceKeysView {
  /** newest first */
  keys: WorkplaceKeyView[]
  may: { rotate: Allowed }
}
