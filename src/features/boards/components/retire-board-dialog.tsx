import { useState } from 'react'
import { ConfirmByName } from '../../../components/ui/confirm-by-name.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useRetireBoard } from '../mutations.ts'

/** Takes a board out of use for good: the reason, and its serial number written again. */
export function RetireBoardDialog({ serial, onClose }: { serial: string; onClose: () => void }) {
  const retire = useRetireBoard(serial)
  const [reason, setReason] = useState('')
  return (
    <ConfirmByName
      open
      onClose={onClose}
      title={`Retire ${serial}`}
      name={serial}
      noun="board"
      act="Retire"
      pending={retire.isPending}
      unavailable={reason.trim() === '' ? 'Write the reason first.' : null}
      onConfirm={() => retire.mutate({ serial, reason: reason.trim() }, { onSuccess: onClose })}
    >
      <p className="text-13">It leaves its joint and takes no further flash, for good. Its history stays.</p>
      <TextArea label="Reason" value={reason} onChange={setReason} maxLength={500} error={fieldError(retire.error, '/reason')} />
      <ProblemPanel problem={retire.error} shown={['/reason']} />
    </ConfirmByName>
  )
}
