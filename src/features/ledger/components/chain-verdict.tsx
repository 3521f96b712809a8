import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { count } from '../../../lib/format.ts'
import { verdictQuery } from '../queries.ts'

/** Walks the chain when asked to, and says whether every entry follows from the one before. */
export function ChainVerdict() {
  const [asked, setAsked] = useState(false)
  const verdict = useQuery({ ...verdictQuery, enabled: asked })
  const result = verdict.data
  return (
    <div className="flex flex-wrap items-center gap-x-4 gap-y-2">
      <Button
        pending={verdict.isFetching}
        onClick={() => {
          setAsked(true)
          if (asked) void verdict.refetch()
        }}
      >
        Verify the chain
      </Button>
      <span role="status" className="text-13">
        {verdict.isFetching ? 'Walking along the chain…' : result?.holds ? (
          <FindingMark level="pass">
            chain holds, {count(result.entries, 'entry', 'entries')}, last <Hash hash={result.lastHash} bytes={4} />
          </FindingMark>
        ) : result ? (
          <FindingMark level="block">
            the chain breaks at entry {result.sequence}: {result.why}. {count(result.entries, 'entry holds', 'entries hold')} before it. Keep a copy of the database and tell everybody who signs.
          </FindingMark>
        ) : null}
      </span>
      {!verdict.isFetching && <ProblemPanel problem={verdict.error} />}
    </div>
  )
}
