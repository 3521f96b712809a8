import canonicalize from 'canonicalize'
import { EXPORTER_VERSION } from './export-context.ts'
import { sha256 } from './record.ts'

export const STATEMENT_TYPE = 'https://in-toto.io/Statement/v1'
export const PREDICATE_TYPE = 'https://detent.example/release-manifest/1'

type Json = Readonly<Record<string, unknown>>

export interface KitFile {
  /** Path in the kit: letters, digits, `.`, `-`, `_`, `/`. */
  readonly path: string
  readonly bytes: Uint8Array
}

export interface ManifestJoint {
  readonly joint: string
  readonly family: string | null
  readonly bus: string
  /** Seven-bit bus address. */
  readonly address: number
  readonly revision: number
  readonly firmware: { readonly line: string; readonly version: string; readonly schemaSha256: string; readonly imageSha256: string | null }
  /** SHA-256 of the register image. */
  readonly imageSha256: string
  /** Serial number that the joint's board-bound values belong to; null for none. */
  readonly board: string | null
}

export interface ManifestInput {
  readonly toolVersion: string
  readonly release: {
    readonly machine: string
    readonly version: string
    /** Number that only grows; not the version (RFC 9124 §3.2, manifest sequence number). */
    readonly sequence: number
    /** RFC 3339, UTC. */
    readonly releasedAt: string
    readonly contentHash: string
    readonly reason: string
  }
  readonly signatures: readonly { readonly person: string; readonly meaning: string; readonly signedAt: string; readonly contentHash: string }[]
  /** Verdict of the check for each joint. */
  readonly verdicts: readonly Json[]
  readonly concessions: readonly Json[]
  readonly joints: readonly ManifestJoint[]
  readonly files: readonly KitFile[]
}

export const CAUTION =
  'First power-on: joint free to move or unloaded, current limited, people clear, emergency stop in reach. A stable model is no proof of a safe machine; local rules, the machine’s risk assessment and qualified people decide.'

/**
 * Manifest of a release: an in-toto Statement in RFC 8785 canonical JSON, every file of the kit a subject with its SHA-256.
 *
 * @throws  RangeError for a path that is unsafe or stands twice; Error (canonicalize) for a number that JSON cannot hold
 * @source  in-toto Statement v1; RFC 8785
 */
export function buildManifest(input: ManifestInput): string {
  checkPaths(input.files)
  const statement = {
    _type: STATEMENT_TYPE,
    subject: sortedByPath(input.files).map((file) => ({ name: file.path, digest: { sha256: sha256(file.bytes) } })),
    predicateType: PREDICATE_TYPE,
    predicate: {
      tool: { name: 'Detent', version: input.toolVersion },
      exporter: EXPORTER_VERSION,
      release: input.release,
      signatures: input.signatures,
      verdicts: input.verdicts,
      concessions: input.concessions,
      joints: input.joints,
      caution: CAUTION,
    },
  }
  const text = canonicalize(statement)
  if (text === undefined) throw new TypeError('The manifest is no JSON value.')
  return text
}

export const sortedByPath = <T extends { readonly path: string }>(files: readonly T[]): T[] =>
  [...files].sort((a, b) => (a.path < b.path ? -1 : a.path > b.path ? 1 : 0))

/** A path that stays inside the directory it is unpacked into. */
export const isSafePath = (path: string): boolean =>
  path.length <= 200 && /^[A-Za-z0-9._-]+(\/[A-Za-z0-9._-]+)*$/.test(path) && !path.split('/').some((step) => step === '.' || step === '..')

function checkPaths(files: readonly KitFile[]): void {
  const seen = new Set<string>()
  for (const { path } of files) {
    if (!isSafePath(path)) throw new RangeError(`${JSON.stringify(path)} cannot be a path in a kit.`)
    // some file systems take names that differ in case alone for one
    if (seen.has(path.toLowerCase())) throw new RangeError(`${path} stands in the kit twice.`)
    seen.add(path.toLowerCase())
  }
}
