import { createHash } from 'node:crypto'
import canonicalize from 'canonicalize'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'

/** A parameter schema read once: the document, its hash, and what the codec uses. */
export interface KnownSchema {
  /** the parsed document, as the check's inputs carry it */
  document: unknown
  /** SHA-256 of the document's RFC 8785 form */
  hash: string
  schema: ParameterSchema
}

export const hashOf = (document: unknown): string => createHash('sha256').update(canonicalize(document)!).digest('hex')

/** Schemas kept read; a workplace uses a handful, and the longest unused goes first. */
export const mostKept = 64
const kept = new Map<string, KnownSchema>()

/** A schema by its hash, read by `read` unless it is kept; the same hash is the same document, so nothing kept is ever stale. */
export function knownSchema(hash: string, read: () => KnownSchema): KnownSchema {
  const known = kept.get(hash) ?? read()
  kept.delete(hash)
  kept.set(hash, known)
  if (kept.size > mostKept) kept.delete(kept.keys().next().value!)
  return known
}

export const keptCount = () => kept.size
