import type { FieldRow } from '../../../shared/contract/reviews.ts'
import { same } from '../../../shared/parameters/edits.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import { marked } from './marked.ts'

/** Numbers, truths and records as JSON, text as it is. */
const text = (v: unknown) => (v === undefined ? null : typeof v === 'string' ? v : JSON.stringify(v))

/** Fields that differ between two records, each with its key and place. */
export const fieldRows = (before: object | undefined, after: object | undefined, at: { key: string; path: string[] }): FieldRow[] => {
  const [a, b] = [(before ?? {}) as Record<string, unknown>, (after ?? {}) as Record<string, unknown>]
  return [...new Set([...Object.keys(a), ...Object.keys(b)])]
    .filter((k) => !same(a[k], b[k]))
    .map((field) => marked({ field, before: text(a[field]), after: text(b[field]) }, { key: `${at.key}:${field}`, pointer: toPointer([...at.path, field]) }))
}
