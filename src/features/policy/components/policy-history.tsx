import type { PolicyView } from '../../../../shared/contract/policy.ts'
import { Time } from '../../../components/ui/time.tsx'
import { PolicyTable } from './policy-table.tsx'

/** Earlier policies and declined ones, newest first; each opens to its limits. */
export function PolicyHistory({ versions }: { versions: readonly PolicyView[] }) {
  return versions.map((v) => (
    <details key={v.number} className="border-b border-hairline py-[6px]">
      <summary>
        policy <span className="num">{v.number}</span>{' '}
        <span className="text-13 text-ink-2">
          {v.state}, proposed by {v.author ?? 'Detent'} <Time at={v.proposedAt} />
          {v.signedAt && v.signedBy && <>, signed by {v.signedBy} <Time at={v.signedAt} /></>}
        </span>
      </summary>
      <p className="my-2 max-w-[80ch] whitespace-pre-wrap text-13">{v.reason}</p>
      <PolicyTable label={`policy ${v.number}`} content={v.content} />
    </details>
  ))
}
