import { useQuery } from '@tanstack/react-query'
import type { CheckpointView } from '../../../../shared/contract/ledger.ts'
import { refusal } from '../../../components/layout/refused.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { Waiting } from '../../../components/ui/waiting.tsx'
import { count } from '../../../lib/format.ts'
import { useSignCheckpoint } from '../mutations.ts'
import { checkpointsQuery } from '../queries.ts'
import { HeldFile } from './held-file.tsx'

const occasions = { daily: 'once a day', release: 'with a release', backup: 'with a backup', asked: 'asked for' } as const

const columns: Column<CheckpointView>[] = [
  { key: 'sequence', head: 'Up to entry', className: 'num', cell: (c) => c.sequence },
  { key: 'at', head: 'Signed', className: 'whitespace-nowrap', cell: (c) => <Time at={c.at} style="long" /> },
  { key: 'occasion', head: 'Occasion', className: 'whitespace-nowrap', cell: (c) => occasions[c.occasion] },
  { key: 'hash', head: 'Hash', align: 'end', cell: (c) => <Hash hash={c.hash} bytes={4} /> },
]

/** Signed ends of the ledger: to be taken away and kept, and to be held against it later. */
export function CheckpointsDialog({ onClose }: { onClose: () => void }) {
  const checkpoints = useQuery(checkpointsQuery)
  const sign = useSignCheckpoint()
  const page = checkpoints.data
  return (
    <Dialog
      open
      wide
      onClose={onClose}
      busy={sign.isPending}
      title="Checkpoints"
      actions={
        <>
          <Button unavailable={page && refusal(page.may.sign)} pending={sign.isPending} onClick={() => sign.mutate()}>
            Sign one now
          </Button>
          <Button onClick={onClose}>Close</Button>
        </>
      }
    >
      <p className="text-13 text-ink-2">Whoever can write in the database can write its chain anew. A checkpoint states the ledger’s last entry and is signed with the workplace’s key: kept elsewhere, it shows a ledger that was cut short or written anew.</p>
      <p className="text-13">
        <a className="link" href="/api/ledger/checkpoints.jsonl" download>
          Take all checkpoints away
        </a>{' '}
        <span className="text-ink-2">to a place that administrators of this server can’t write to</span>
      </p>
      <HeldFile />
      {page === undefined ? (
        checkpoints.isError ? <ProblemPanel problem={checkpoints.error} onRetry={() => void checkpoints.refetch()} /> : <Waiting what="the checkpoints" lines={4} />
      ) : (
        <>
          <Table dense className="max-sm:overflow-x-auto" label="checkpoints" rows={page.checkpoints} columns={columns} rowKey={(c) => `${c.sequence} ${c.at}`} empty="No checkpoint was signed yet: the first comes with the first release or the first day." />
          {page.total > page.checkpoints.length && <p className="text-13 text-ink-2">the newest {page.checkpoints.length} of {count(page.total, 'checkpoint')}</p>}
        </>
      )}
      <ProblemPanel problem={sign.error} />
    </Dialog>
  )
}
