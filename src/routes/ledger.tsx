import { useInfiniteQuery, useQuery } from '@tanstack/react-query'
import type { LoaderFunctionArgs } from 'react-router'
import { PageHead } from '../components/layout/page-head.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { Button } from '../components/ui/button.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { ChainVerdict } from '../features/ledger/components/chain-verdict.tsx'
import { CheckpointsDialog } from '../features/ledger/components/checkpoints-dialog.tsx'
import { EntryDialog } from '../features/ledger/components/entry-dialog.tsx'
import { LedgerFilterFields } from '../features/ledger/components/ledger-filter.tsx'
import { LedgerTable } from '../features/ledger/components/ledger-table.tsx'
import { entryQuery, ledgerQuery } from '../features/ledger/queries.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { peopleQuery } from '../features/people/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ request }: LoaderFunctionArgs) => {
  const asked = new URL(request.url).searchParams
  void queryClient.prefetchInfiniteQuery(ledgerQuery({ act: asked.get('act') ?? '', machine: asked.get('machine') ?? '', person: asked.get('person') ?? '' }))
  return null
}

export function Component() {
  const [act, setAct] = useUrlText('act')
  const [machine, setMachine] = useUrlText('machine')
  const [person, setPerson] = useUrlText('person')
  const [chosen, setChosen] = useUrlText('entry')
  const [checkpoints, setCheckpoints] = useUrlText('checkpoints')
  const ledger = useInfiniteQuery(ledgerQuery({ act, machine, person }))
  const machines = useQuery(machinesQuery).data ?? []
  const people = useQuery(peopleQuery).data?.people ?? []
  const pages = ledger.data?.pages ?? []
  const entries = pages.flatMap((p) => p.entries)
  const loaded = entries.find((e) => String(e.sequence) === chosen)
  // One that was led to from elsewhere may lie further back than what is shown.
  const sought = useQuery(entryQuery(loaded ? '' : chosen))
  const entry = loaded ?? sought.data ?? undefined
  const machineName = (key: string) => machines.find((m) => m.key === key)?.name ?? key
  return (
    <>
      <PageHead
        title="Ledger"
        actions={
          <>
            <Button onClick={() => setCheckpoints('shown')}>Checkpoints…</Button>
            <a className="btn" href="/api/ledger/export.csv" download>
              Export as a table
            </a>
            <a className="btn" href="/api/ledger/export.jsonl" download>
              Export all
            </a>
          </>
        }
      >
        every act, each entry chained to the one before by its hash
      </PageHead>
      <div className="mb-4">
        <ChainVerdict />
      </div>
      <LedgerFilterFields act={act} machine={machine} person={person} onAct={setAct} onMachine={setMachine} onPerson={setPerson} acts={pages[0]?.acts ?? []} machines={machines} people={people.map((p) => p.name)} />
      {ledger.data === undefined ? (
        ledger.isError ? <ProblemPanel problem={ledger.error} onRetry={() => void ledger.refetch()} /> : <Waiting what="the ledger" lines={8} />
      ) : (
        <>
          <LedgerTable entries={entries} machineName={machineName} chosen={entry?.sequence ?? null} onOpen={(e) => setChosen(String(e.sequence))} />
          <div className="mt-3 flex flex-wrap items-center gap-4 text-13 text-ink-2">
            <span>
              {count(entries.length, 'entry', 'entries')} of {count(pages[0].total, 'entry', 'entries')} shown
            </span>
            {ledger.hasNextPage && (
              <Button small pending={ledger.isFetchingNextPage} onClick={() => void ledger.fetchNextPage()}>
                Show older ones
              </Button>
            )}
          </div>
          {ledger.isError && <ProblemPanel className="mt-2" problem={ledger.error} onRetry={() => void ledger.refetch()} />}
        </>
      )}
      {checkpoints && <CheckpointsDialog onClose={() => setCheckpoints('')} />}
      {!entry && sought.isError && <ProblemPanel className="mt-2" problem={sought.error} />}
      {entry && <EntryDialog entry={entry} onClose={() => setChosen('')} />}
    </>
  )
}
