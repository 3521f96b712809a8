import type { CheckpointsVerdict } from '../../../../shared/contract/ledger.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'
import { useHoldCheckpoints } from '../mutations.ts'

function Verdict({ verdict }: { verdict: CheckpointsVerdict }) {
  if (verdict.holds)
    return (
      <FindingMark level="pass">
        {count(verdict.checkpoints, 'checkpoint holds', 'checkpoints hold')}: entries up to {verdict.upTo} stand as signed{verdict.newest && <> on <Time at={verdict.newest} style="long" /></>} or before
      </FindingMark>
    )
  return (
    <FindingMark level="block">
      line {verdict.line} does not hold: {verdict.why}. {verdict.goodUpTo > 0 ? `Entries up to ${verdict.goodUpTo} are as they were signed.` : 'No entry is vouched for by a line before it.'} Keep a copy of the database and of this file, and tell everybody who signs.
    </FindingMark>
  )
}

/** Holds a file of checkpoints that was kept elsewhere against the ledger. */
export function HeldFile() {
  const hold = useHoldCheckpoints()
  return (
    <div className="flex flex-wrap items-center gap-x-4 gap-y-2">
      <label className="btn focus-within:outline-2 focus-within:outline-offset-2 focus-within:outline-brass">
        {hold.isPending ? 'Holding it against the ledger…' : 'Hold a kept file against the ledger…'}
        <input
          type="file"
          accept=".jsonl,.txt,application/jsonl"
          className="sr-only"
          disabled={hold.isPending}
          onChange={(event) => {
            const [file] = event.target.files ?? []
            // chosen again, the same file is read again
            event.target.value = ''
            if (file) hold.mutate(file)
          }}
        />
      </label>
      <span role="status" className="text-13">{hold.data && !hold.isPending && <Verdict verdict={hold.data} />}</span>
      <ProblemPanel problem={hold.error} />
    </div>
  )
}
