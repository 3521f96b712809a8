import { createPublicKey, type KeyObject } from 'node:crypto'
import { zipSync, type Zippable } from 'fflate'
import type { EncodedImage } from '../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../shared/registers/parameter-schema.ts'
import { fileSlug, type ExportContext } from './export-context.ts'
import { exportAll } from './export-file.ts'
import { kitReadme } from './kit-readme.ts'
import { buildManifest, sortedByPath, type KitFile, type ManifestInput } from './manifest.ts'
import { sha256 } from './record.ts'
import { keyId, publicKeyPem, sealManifest, signText } from './sign-manifest.ts'

/** What is stored at release, beside the images: everything else of a kit is made again from it. */
export interface SignedManifest {
  readonly manifest: string
  /** Over manifest.json. */
  readonly signature: Uint8Array
  /** DSSE. */
  readonly envelope: string
  /** Over SHA256SUMS. */
  readonly sumsSignature: Uint8Array
  readonly publicKey: string
}

/** Where a joint's file lies in a kit. */
export const jointPath = (joint: string, name: string): string => `joints/${fileSlug(joint)}/${name}`

/** Files of one joint in a kit: every export under `joints/NAME/`. */
export const jointFiles = (schema: ParameterSchema, encoded: EncodedImage, context: ExportContext): KitFile[] =>
  exportAll(schema, encoded, context).map(({ name, bytes }) => ({ path: jointPath(context.joint, name), bytes }))

/** Where a firmware image lies in a kit. */
export const firmwarePath = (line: string, version: string, ending: 'bin' | 'hex'): string =>
  `firmware/${fileSlug(line)}-${fileSlug(version)}.${ending}`

/**
 * Signs a release's files: manifest with the README among its subjects, DSSE envelope, list of sums.
 *
 * @param input  files of all joints and firmware images; the README is added here
 * @param key    the workplace's private Ed25519 key
 */
export function signKit(input: ManifestInput, key: KeyObject): { readonly files: readonly KitFile[]; readonly signed: SignedManifest } {
  const { machine, version, sequence } = input.release
  const readme = new TextEncoder().encode(kitReadme({ machine, version, sequence, keyId: keyId(key) }))
  const files = [...input.files, { path: 'README.txt', bytes: readme }]
  const manifest = buildManifest({ ...input, files })
  const unsigned = { manifest, signature: signText(manifest, key), envelope: sealManifest(manifest, key), publicKey: publicKeyPem(key) }
  return { files, signed: { ...unsigned, sumsSignature: signText(sumsOf(files, unsigned), key) } }
}

/** README of a kit that is made again later, under the key it was signed with. */
export const readmeFor = (release: ManifestInput['release'], publicKey: string): KitFile => ({
  path: 'README.txt',
  bytes: new TextEncoder().encode(kitReadme({ ...release, keyId: keyId(createPublicKey(publicKey)) })),
})

/** SHA256SUMS: every file of the kit but itself and its signature, by path, as sha256sum writes it. */
export const sumsOf = (files: readonly KitFile[], signed: Omit<SignedManifest, 'sumsSignature'>): string =>
  sumLines([...files, ...ownFiles(signed)])

export const sumLines = (files: readonly KitFile[]): string =>
  sortedByPath(files).map((file) => `${sha256(file.bytes)}  ${file.path}\n`).join('')

function ownFiles(signed: Omit<SignedManifest, 'sumsSignature'>): KitFile[] {
  const text = new TextEncoder()
  return [
    { path: 'manifest.json', bytes: text.encode(signed.manifest) },
    { path: 'manifest.sig', bytes: signed.signature },
    { path: 'manifest.dsse.json', bytes: text.encode(signed.envelope) },
    { path: 'public-key.pem', bytes: text.encode(signed.publicKey) },
  ]
}

/**
 * The kit as one .zip: entries by path, one fixed date, so that the same release gives the same bytes.
 *
 * @throws RangeError when a file is not the one the manifest names: nothing that differs is packed
 */
export function packKit(files: readonly KitFile[], signed: SignedManifest): Uint8Array {
  checkAgainstManifest(files, signed.manifest)
  const own = ownFiles(signed)
  const sums = new TextEncoder().encode(sumLines([...files, ...own]))
  const entries: Zippable = {}
  const all = [...files, ...own, { path: 'SHA256SUMS', bytes: sums }, { path: 'SHA256SUMS.sig', bytes: signed.sumsSignature }]
  for (const file of sortedByPath(all)) entries[file.path] = file.bytes
  // the zip format has local time without a zone: a date made of local parts is written the same everywhere
  return zipSync(entries, { level: 6, mtime: new Date(1980, 0, 1), os: 3, attrs: 0o100644 << 16 })
}

function checkAgainstManifest(files: readonly KitFile[], manifest: string): void {
  const { subject } = JSON.parse(manifest) as { subject: { name: string; digest: { sha256: string } }[] }
  const wanted = new Map(subject.map((s) => [s.name, s.digest.sha256]))
  for (const file of files) {
    if (wanted.get(file.path) !== sha256(file.bytes)) throw new RangeError(`${file.path} is not the file that the manifest names.`)
    wanted.delete(file.path)
  }
  const [missing] = wanted.keys()
  if (missing !== undefined) throw new RangeError(`${missing} stands in the manifest and is missing.`)
}
