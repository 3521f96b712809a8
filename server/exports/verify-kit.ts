import { createPublicKey, type KeyObject } from 'node:crypto'
import { sumLines } from './kit.ts'
import { PREDICATE_TYPE, STATEMENT_TYPE } from './manifest.ts'
import { readZip } from './read-zip.ts'
import { sha256 } from './record.ts'
import { keyId, openEnvelope, verifyText } from './sign-manifest.ts'

const OWN = ['manifest.json', 'manifest.sig', 'manifest.dsse.json', 'public-key.pem', 'SHA256SUMS', 'SHA256SUMS.sig'] as const

export interface KitSummary {
  readonly machine: string
  readonly version: string
  readonly sequence: number
  readonly files: number
}

export type KitVerification =
  | { readonly kind: 'verified'; readonly keyId: string; /** False when the kit's own key was used: it proves the kit whole, not whose it is. */ readonly keyTrusted: boolean; readonly release: KitSummary }
  | { readonly kind: 'refused'; readonly problems: readonly string[] }

const refused = (...problems: string[]): KitVerification => ({ kind: 'refused', problems })

/**
 * Proves a kit offline: signatures, every file against the signed manifest, nothing missing, nothing added.
 *
 * @param trustedKey  the workplace's public key as PEM, got another way than with the kit; null takes the kit's own
 */
export function verifyKit(zip: Uint8Array, trustedKey: string | null): KitVerification {
  const reading = readZip(zip)
  if (reading.kind === 'refused') return refused(reading.message)
  const { files } = reading
  const missing = OWN.filter((name) => !files.has(name))
  if (missing.length > 0) return refused(`The kit lacks ${missing.join(', ')}.`)
  const unreadable = OWN.filter((name) => !name.endsWith('.sig') && textOf(files.get(name)!) === null)
  if (unreadable.length > 0) return refused(`${unreadable.join(', ')} ${unreadable.length === 1 ? 'is' : 'are'} no text in UTF-8.`)
  const text = (name: string): string => textOf(files.get(name)!)!
  const key = readKey(trustedKey ?? text('public-key.pem'))
  if (!key) return refused(trustedKey === null ? 'public-key.pem is no Ed25519 public key.' : 'The given key is no Ed25519 public key in PEM.')

  const problems: string[] = []
  const own = readKey(text('public-key.pem'))
  if (!own || keyId(own) !== keyId(key)) problems.push('The kit’s public-key.pem is not the given key.')
  const manifest = text('manifest.json')
  if (!verifyText(manifest, files.get('manifest.sig')!, key)) problems.push('manifest.sig is no signature of manifest.json by this key.')
  const envelope = openEnvelope(text('manifest.dsse.json'), key)
  if (envelope.kind === 'refused') problems.push(envelope.message)
  else if (envelope.manifest !== manifest) problems.push('The envelope holds another manifest than manifest.json.')
  if (!verifyText(text('SHA256SUMS'), files.get('SHA256SUMS.sig')!, key)) problems.push('SHA256SUMS.sig is no signature of SHA256SUMS by this key.')
  const listed = [...files].filter(([path]) => path !== 'SHA256SUMS' && path !== 'SHA256SUMS.sig').map(([path, bytes]) => ({ path, bytes }))
  if (sumLines(listed) !== text('SHA256SUMS')) problems.push('SHA256SUMS does not agree with the files.')
  const release = readStatement(manifest, files, problems)
  if (problems.length > 0 || !release) return { kind: 'refused', problems: problems.length > 0 ? problems : ['manifest.json is no release manifest.'] }
  return { kind: 'verified', keyId: keyId(key), keyTrusted: trustedKey !== null, release }
}

/** The text, byte for byte: a mark at its start is a part of it, since openssl and sha256sum see it too. */
function textOf(bytes: Uint8Array): string | null {
  try {
    return new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes)
  } catch {
    return null
  }
}

function readKey(pem: string): KeyObject | null {
  try {
    const key = createPublicKey(pem)
    return key.asymmetricKeyType === 'ed25519' ? key : null
  } catch {
    return null
  }
}

interface Statement {
  readonly _type?: unknown
  readonly predicateType?: unknown
  readonly subject?: unknown
  readonly predicate?: { readonly release?: { readonly machine?: unknown; readonly version?: unknown; readonly sequence?: unknown } }
}

function readStatement(manifest: string, files: ReadonlyMap<string, Uint8Array>, problems: string[]): KitSummary | null {
  let statement: Statement | null
  try {
    statement = JSON.parse(manifest) as Statement | null
  } catch {
    return null
  }
  if (typeof statement !== 'object' || statement === null || statement._type !== STATEMENT_TYPE || statement.predicateType !== PREDICATE_TYPE || !Array.isArray(statement.subject)) return null
  const named = new Set<string>(OWN)
  for (const subject of statement.subject as ({ name?: unknown; digest?: { sha256?: unknown } | null } | null)[]) {
    if (typeof subject?.name !== 'string') {
      problems.push('An entry of the manifest names no file.')
      continue
    }
    const { name } = subject
    if (named.has(name)) problems.push(`${name} stands in the manifest twice, or names a file of the proof itself.`)
    const bytes = files.get(name)
    named.add(name)
    if (!bytes) problems.push(`${name} stands in the manifest and is missing.`)
    else if (sha256(bytes) !== subject.digest?.sha256) problems.push(`${name} is not the file that was signed.`)
  }
  for (const name of files.keys()) if (!named.has(name)) problems.push(`${name} is not in the manifest.`)
  const release = statement.predicate?.release
  if (typeof release?.machine !== 'string' || typeof release.version !== 'string' || typeof release.sequence !== 'number') return null
  return { machine: release.machine, version: release.version, sequence: release.sequence, files: statement.subject.length }
}
