import { createCipheriv, createDecipheriv, hkdfSync, randomBytes } from 'node:crypto'

/** Closes secrets that stand in the database with a key that does not. */
export interface Seals {
  /** @param whose  what the secret belongs to: sealed for one, it opens for no other */
  seal(secret: Uint8Array, whose: string): string
  /** @returns null when it was sealed with another key, for another owner, or altered */
  open(sealed: string, whose: string): Uint8Array | null
}

/** AES-256-GCM under a key drawn from the secret by HKDF-SHA-256; 96-bit random nonces, the owner as associated data. */
export function sealsOf(secret: Uint8Array): Seals {
  const key = Buffer.from(hkdfSync('sha256', secret, new Uint8Array(), 'detent second factors', 32))
  return {
    seal(plain, whose) {
      const nonce = randomBytes(12)
      const cipher = createCipheriv('aes-256-gcm', key, nonce).setAAD(Buffer.from(whose))
      return `1.${Buffer.concat([nonce, cipher.update(plain), cipher.final(), cipher.getAuthTag()]).toString('base64url')}`
    },
    open(sealed, whose) {
      const bytes = Buffer.from(sealed.slice(2), 'base64url')
      if (!sealed.startsWith('1.') || bytes.length < 29) return null
      const decipher = createDecipheriv('aes-256-gcm', key, bytes.subarray(0, 12), { authTagLength: 16 }).setAAD(Buffer.from(whose)).setAuthTag(bytes.subarray(-16))
      try {
        return Buffer.concat([decipher.update(bytes.subarray(12, -16)), decipher.final()])
      } catch {
        return null
      }
    },
  }
}
