import { useState } from 'react'
import type { PolicyContent, PolicyView } from '../../../../shared/contract/policy.ts'
import { refusal } from '../../../components/layout/refused.ts'
import { Button } from '../../../components/ui/button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { PolicyTable } from './policy-table.tsx'
import { DeclinePolicyDialog, SignPolicyDialog } from './sign-policy-dialog.tsx'

/** A policy that waits for a release manager's signature, beside what is in force. */
export function ProposedPolicy({ policy, inForce }: { policy: PolicyView; inForce: PolicyContent }) {
  const [dialog, setDialog] = useState<'sign' | 'decline' | null>(null)
  return (
    <section aria-labelledby="proposed" className="mb-8">
      <SectionHeading id="proposed" aux={<>by {policy.author ?? 'Detent'}, <Time at={policy.proposedAt} style="long" /></>}>
        Policy {policy.number}, proposed
      </SectionHeading>
      <p className="my-2 max-w-[80ch] whitespace-pre-wrap">{policy.reason}</p>
      <PolicyTable label={`policy ${policy.number}`} content={policy.content} before={inForce} />
      <div className="mt-3 flex flex-wrap gap-2">
        <Button kind="primary" unavailable={refusal(policy.may.sign)} onClick={() => setDialog('sign')}>
          Sign…
        </Button>
        <Button kind="danger" unavailable={refusal(policy.may.decline)} onClick={() => setDialog('decline')}>
          Decline…
        </Button>
        {!policy.may.sign.allowed && <span className="help self-center">{policy.may.sign.why}</span>}
      </div>
      {dialog === 'sign' && <SignPolicyDialog policy={policy} onClose={() => setDialog(null)} />}
      {dialog === 'decline' && <DeclinePolicyDialog policy={policy} onClose={() => setDialog(null)} />}
    </section>
  )
}
