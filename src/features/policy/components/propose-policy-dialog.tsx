import { useState } from 'react'
import type { MachinePolicyView } from '../../../../shared/contract/policy.ts'
import { defaultPolicy, policyContradictions } from '../../../../shared/contract/policy.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { NumberField } from '../../../components/ui/number-field.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { parseNumber } from '../../../lib/format.ts'
import { useProposePolicy } from '../mutations.ts'
import { contentOf, limitAt, policyFields, type Limit } from '../policy-fields.ts'

export function ProposePolicyDialog({ policy, onClose }: { policy: MachinePolicyView; onClose: () => void }) {
  const propose = useProposePolicy(policy.machine)
  const start = policy.inForce.content
  const [typed, setTyped] = useState<Record<string, string>>(() => Object.fromEntries(policyFields.map((f) => [f.pointer, String(limitAt(start, f.pointer) ?? limitAt(defaultPolicy, f.pointer))])))
  const [reason, setReason] = useState('')
  const parsed = policyFields.filter((f) => !f.choices).map((f) => ({ pointer: f.pointer, read: parseNumber(typed[f.pointer]) }))
  const wrong = new Map(parsed.flatMap((p) => (p.read.kind === 'error' ? [[p.pointer, p.read.message] as const] : [])))
  const limits: Record<string, Limit> = { ...typed, ...Object.fromEntries(parsed.map((p) => [p.pointer, p.read.kind === 'number' ? p.read.value : Number.NaN])) }
  const content = contentOf(limits)
  const contradictions = wrong.size === 0 ? new Map(policyContradictions(content).map((c) => [c.pointer, c.detail])) : new Map<string, string>()
  const altered = policyFields.some((f) => limits[f.pointer] !== limitAt(start, f.pointer))
  const missing =
    wrong.size > 0 ? 'Some limits are no numbers.'
    : contradictions.size > 0 ? 'Some limits contradict each other.'
    : !altered ? 'Nothing is altered yet.'
    : reason.trim() === '' ? 'Write the reason first.'
    : null
  return (
    <Dialog
      open
      wide
      onClose={onClose}
      busy={propose.isPending}
      title={`Propose a policy for ${policy.machineName}`}
      actions={
        <>
          <Button kind="primary" unavailable={missing} pending={propose.isPending} onClick={() => propose.mutate({ content, reason: reason.trim() }, { onSuccess: onClose })}>
            Propose it
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <p className="text-13 text-ink-2">It holds when a release manager other than you has signed it. Then every check of {policy.machineName} under the old policy is stale.</p>
      <div className="grid gap-x-6 gap-y-2 sm:grid-cols-2">
        {policyFields.map((f) =>
          f.choices ? (
            <Select
              key={f.pointer}
              label={
                <>
                  {f.name} <span className="font-normal text-ink-2">{f.stage}</span>
                </>
              }
              value={typed[f.pointer]}
              options={f.choices.map((c) => ({ value: c, label: c }))}
              onChange={(text) => setTyped((t) => ({ ...t, [f.pointer]: text }))}
              error={fieldError(propose.error, `/content${f.pointer}`)}
            />
          ) : (
          <NumberField
            key={f.pointer}
            label={
              <>
                {f.name} <span className="font-normal text-ink-2">{f.stage}</span>
              </>
            }
            unit={f.unit}
            value={typed[f.pointer]}
            onChange={(text) => setTyped((t) => ({ ...t, [f.pointer]: text }))}
            error={wrong.get(f.pointer) ?? contradictions.get(f.pointer) ?? fieldError(propose.error, `/content${f.pointer}`)}
            help={limits[f.pointer] !== limitAt(start, f.pointer) && !wrong.has(f.pointer) ? <>in force: <span className="num">{limitAt(start, f.pointer) ?? 'no rule'}</span></> : undefined}
          />
          ),
        )}
      </div>
      <TextArea label="Reason" value={reason} onChange={setReason} maxLength={2000} error={fieldError(propose.error, '/reason')} />
      <ProblemPanel problem={propose.error} shown={['/reason', ...policyFields.map((f) => `/content${f.pointer}`)]} />
    </Dialog>
  )
}
