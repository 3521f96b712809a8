import { useState } from 'react'
import type { ReactNode } from 'react'
import type { ReleaseView } from '../../../../shared/contract/releases.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { ConfirmByName } from '../../../components/ui/confirm-by-name.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useWithdrawRelease } from '../mutations.ts'

/** Withdraws a release: what it touches, the reason, and its name written again. */
export function WithdrawDialog({ release, open, onClose, children }: { release: ReleaseView; open: boolean; onClose: () => void; children?: ReactNode }) {
  const withdraw = useWithdrawRelease(release)
  const [reason, setReason] = useState('')
  const name = `${release.machineName} ${release.version}`
  return (
    <ConfirmByName
      open={open}
      onClose={onClose}
      title={`Withdraw ${name}`}
      name={name}
      noun="release"
      act="Withdraw"
      pending={withdraw.isPending}
      unavailable={reason.trim() === '' ? 'Write the reason first.' : null}
      onConfirm={() => withdraw.mutate({ version: release.version, reason: reason.trim() }, { onSuccess: onClose })}
    >
      <p className="text-13">It must no longer be flashed, for good. {release.state === 'current' ? `${release.machineName} then has no current release until the next one.` : ''} Only a release manager can fetch its files, for analysis. The reason is mailed to everybody who flashed it.</p>
      {children}
      <TextArea label="Reason" value={reason} onChange={setReason} maxLength={2000} error={fieldError(withdraw.error, '/reason')} />
      <ProblemPanel problem={withdraw.error} shown={['/reason']} />
    </ConfirmByName>
  )
}
