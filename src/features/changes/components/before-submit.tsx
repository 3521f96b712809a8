import type { Finding } from '../../../../shared/contract/checks.ts'
import { Button } from '../../../components/ui/button.tsx'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import type { Need } from '../submit-needs.ts'

export interface BeforeSubmitProps {
  needs: readonly Need[]
  /** the server's word on whether this person may submit now; null when they may */
  refusal: string | null
  /** findings for which a concession is still to be requested */
  open: readonly Finding[]
  /** concessions requested already */
  requested: number
  onRequest: () => void
  onSubmit: () => void
  onCancel: (() => void) | null
  pending: boolean
  problem: unknown
}

/** What must hold before the change can be submitted, and the way to do it. */
export function BeforeSubmit({ needs, refusal, open, requested, onRequest, onSubmit, onCancel, pending, problem }: BeforeSubmitProps) {
  const first = needs.find((n) => n.state !== 'met')
  return (
    <section aria-label="before it can be submitted">
      <h2 className="label">Before it can be submitted</h2>
      <ul className="grid gap-1 text-13">
        {needs.map((n) => (
          <li key={n.words}>
            {n.state === 'met' ? <FindingMark level="pass" size={15}>{n.words}</FindingMark> : n.state === 'waiting' ? <span className="ml-[22px] text-ink-2">{n.words}</span> : <FindingMark level={n.level} size={15}>{n.words}</FindingMark>}
          </li>
        ))}
      </ul>
      <div className="mt-3 flex flex-wrap gap-2">
        {open.length + requested > 0 && <Button onClick={onRequest}>{open.length === 0 ? 'Concessions…' : open.length === 1 ? 'Request the concession' : 'Request concessions'}</Button>}
        <Button kind={first ? 'plain' : 'primary'} unavailable={refusal ?? (first ? `Not yet: ${first.words}.` : null)} pending={pending} onClick={onSubmit}>
          Submit
        </Button>
        {onCancel && (
          <Button kind="link" onClick={onCancel}>
            Cancel the change…
          </Button>
        )}
      </div>
      {refusal && <p className="help">{refusal}</p>}
      <ProblemPanel className="mt-3" problem={problem} />
    </section>
  )
}
