import { useQuery } from '@tanstack/react-query'
import type { ChangeView } from '../../../shared/contract/changes.ts'
import type { Marked } from '../../../shared/contract/reviews.ts'
import { useMarkRead } from './mutations.ts'
import { readingQuery } from './queries.ts'

/** How far the reader is with the rows of a diff, and the ways to mark them. */
export interface Reading {
  read: ReadonlySet<string>
  rows: number
  others: readonly { name: string; read: number }[]
  /** null when the reader may not mark */
  mark: ((rows: readonly Marked[], read: boolean) => void) | null
  problem: unknown
}

export function useReading(change: ChangeView, reader: string): Reading | null {
  const reading = useQuery(readingQuery(change.key, change.revision)).data
  const mark = useMarkRead(change)
  if (!reading) return null
  return {
    read: new Set(reading.read),
    rows: reading.rows,
    others: reading.people.filter((p) => p.name !== reader),
    mark: reading.may.mark.allowed ? (rows, read) => mark.mutate({ rows, read }) : null,
    problem: mark.error,
  }
}
