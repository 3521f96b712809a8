import { useState } from 'react'
import type { EvidenceView } from '../../../../shared/contract/evidence.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { ConfirmByName } from '../../../components/ui/confirm-by-name.tsx'
import { useRemoveLog } from '../mutations.ts'

/** Takes a log away, its name typed again first. */
export function RemoveLog({ log, onRemoved }: { log: EvidenceView; onRemoved: () => void }) {
  const [asking, setAsking] = useState(false)
  const remove = useRemoveLog(log.machine, log.number)
  return (
    <>
      <Button unavailable={log.may.remove.allowed ? null : log.may.remove.why} onClick={() => setAsking(true)}>
        Remove…
      </Button>
      <ConfirmByName open={asking} onClose={() => setAsking(false)} title={`Remove ${log.name}`} name={log.name} noun="log" act="Remove" onConfirm={() => remove.mutate(undefined, { onSuccess: onRemoved })} pending={remove.isPending}>
        <p>It no longer speaks for {log.change ? `change ${log.change}` : log.jointName}. Its name and hash stay in the ledger, its file in the store.</p>
        <ProblemPanel problem={remove.error} />
      </ConfirmByName>
    </>
  )
}
