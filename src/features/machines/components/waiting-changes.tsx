import { Link } from 'react-router'
import type { ChangeSummary } from '../../../../shared/contract/changes.ts'
import { paths } from '../../../app/paths.ts'
import { SmallRail } from '../../../components/ui/small-rail.tsx'

/** Changes of a machine that are not released yet, one line each. */
export function WaitingChanges({ changes }: { changes: readonly ChangeSummary[] }) {
  return (
    <ul>
      {changes.map((c) => (
        <li key={c.key} className="grid grid-cols-[2.5rem_minmax(0,1fr)] items-baseline gap-x-2 border-b border-hairline py-[6px] last:border-rule sm:grid-cols-[2.5rem_minmax(0,1fr)_12rem]">
          <span className="num text-13 text-ink-2">{c.number}</span>
          <span>
            <Link className="row-link" to={c.state === 'draft' ? paths.change(c.key) : paths.changeReview(c.key)}>
              {c.title}
            </Link>{' '}
            <span className="text-13 text-ink-2">{c.author}</span>
          </span>
          <span className="max-sm:col-start-2">
            <SmallRail state={c.life} />
          </span>
        </li>
      ))}
    </ul>
  )
}
