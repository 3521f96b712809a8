import type { ReactNode } from 'react'
import type { UseQueryResult } from '@tanstack/react-query'
import { ProblemPanel } from '../problem/problem-panel.tsx'
import { Waiting } from '../ui/waiting.tsx'

export interface RegionProps<T> {
  query: UseQueryResult<T>
  /** What is waited for: "the ledger". */
  what: string
  lines?: number
  /** Drawn instead when this says the answer holds nothing. */
  isEmpty?: (data: T) => boolean
  empty?: ReactNode
  children: (data: T) => ReactNode
}

/** A part of a page that reads for itself: waiting, failed, empty or full. An old answer stays while a new one is fetched. */
export function Region<T>({ query, what, lines, isEmpty, empty, children }: RegionProps<T>) {
  if (query.data === undefined) return query.isError ? <ProblemPanel problem={query.error} onRetry={() => void query.refetch()} /> : <Waiting what={what} lines={lines} />
  return (
    <>
      {query.isError && <ProblemPanel className="mb-3" problem={query.error} onRetry={() => void query.refetch()}>What stands below was read before.</ProblemPanel>}
      {isEmpty?.(query.data) ? empty : children(query.data)}
    </>
  )
}
