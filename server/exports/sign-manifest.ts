import { createHash, createPublicKey, sign, verify, type KeyObject } from 'node:crypto'

export const PAYLOAD_TYPE = 'application/vnd.in-toto+json'

const utf8 = (text: string): Buffer => Buffer.from(text, 'utf8')

/** Bytes that a DSSE signature covers. Source: DSSE protocol, v1: PAE. */
export const preAuthEncoding = (payload: string): Buffer =>
  utf8(`DSSEv1 ${utf8(PAYLOAD_TYPE).length} ${PAYLOAD_TYPE} ${utf8(payload).length} ${payload}`)

/** Public half of a key as PEM (SubjectPublicKeyInfo). */
export const publicKeyPem = (key: KeyObject): string =>
  (key.type === 'private' ? createPublicKey(key) : key).export({ type: 'spki', format: 'pem' }).toString()

/** Name of a key: SHA-256 of its DER form, as `openssl pkey -pubin -outform DER | sha256sum` gives it. */
export const keyId = (key: KeyObject): string =>
  createHash('sha256').update((key.type === 'private' ? createPublicKey(key) : key).export({ type: 'spki', format: 'der' })).digest('hex')

/** Ed25519 signature (RFC 8032) over a text's UTF-8 bytes; the same text and key give the same 64 bytes. */
export function signText(text: string, key: KeyObject): Uint8Array {
  if (key.type !== 'private' || key.asymmetricKeyType !== 'ed25519') throw new TypeError('A private Ed25519 key is needed to sign.')
  return new Uint8Array(sign(null, utf8(text), key))
}

/** The manifest in a DSSE envelope: one line of JSON. */
export function sealManifest(manifest: string, key: KeyObject): string {
  if (key.type !== 'private' || key.asymmetricKeyType !== 'ed25519') throw new TypeError('A private Ed25519 key is needed to sign.')
  const signature = sign(null, preAuthEncoding(manifest), key).toString('base64')
  return `${JSON.stringify({ payload: utf8(manifest).toString('base64'), payloadType: PAYLOAD_TYPE, signatures: [{ keyid: keyId(key), sig: signature }] })}\n`
}

export type EnvelopeReading = { readonly kind: 'sealed'; readonly manifest: string } | { readonly kind: 'refused'; readonly message: string }

/** Opens an envelope: payload type, one valid signature by the given public key. */
export function openEnvelope(envelope: string, publicKey: KeyObject): EnvelopeReading {
  const read = parsed(envelope)
  if (!read) return { kind: 'refused', message: 'The envelope is no DSSE envelope.' }
  if (read.payloadType !== PAYLOAD_TYPE) return { kind: 'refused', message: `The envelope holds ${JSON.stringify(read.payloadType)}, not an in-toto statement.` }
  const manifest = Buffer.from(read.payload, 'base64').toString('utf8')
  const signed = preAuthEncoding(manifest)
  const good = read.signatures.some((sig) => verify(null, signed, publicKey, Buffer.from(sig, 'base64')))
  return good ? { kind: 'sealed', manifest } : { kind: 'refused', message: 'No signature in the envelope is by this key over this content.' }
}

function parsed(envelope: string): { payload: string; payloadType: unknown; signatures: string[] } | null {
  let json: unknown
  try {
    json = JSON.parse(envelope)
  } catch {
    return null
  }
  if (typeof json !== 'object' || json === null) return null
  const { payload, payloadType, signatures } = json as Record<string, unknown>
  if (typeof payload !== 'string' || !Array.isArray(signatures)) return null
  const texts = signatures.slice(0, 10).map((s: unknown) => (s as { sig?: unknown } | null)?.sig).filter((s): s is string => typeof s === 'string')
  return { payload, payloadType, signatures: texts }
}

export const verifyText = (text: string, signature: Uint8Array, publicKey: KeyObject): boolean =>
  publicKey.asymmetricKeyType === 'ed25519' && verify(null, utf8(text), publicKey, signature)
