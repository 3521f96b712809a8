import type { EvidenceSummary } from '../../../../shared/contract/evidence.ts'
import { paths } from '../../../app/paths.ts'
import { Hash } from '../../../components/ui/hash.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count, quantityText } from '../../../lib/format.ts'

/** Logs, newest first: what was measured, how long, by whom, and which change they speak for. */
export function EvidenceList({ logs, of }: { logs: readonly EvidenceSummary[]; of: 'joint' | 'change' }) {
  return (
    <ul>
      {logs.map((log) => (
        <li key={log.number} className="grid grid-cols-[minmax(0,1fr)_auto] items-baseline gap-x-4 border-b border-hairline py-2">
          <span className="min-w-0 [overflow-wrap:anywhere]">
            <TextLink to={paths.evidence(log.machine, log.number)}>{log.name}</TextLink>{' '}
            <span className="text-13 text-ink-2">
              {of === 'change' && `${log.jointName}, `}
              {log.reading ? `${log.reading.signals.filter((s) => s !== 'time').join(', ')}; ${count(log.reading.rows, 'row')} over ${quantityText(log.reading.to - log.reading.from, 's')}` : 'columns not read yet: open it to name them'}
            </span>
          </span>
          <Hash hash={log.sha256} bytes={4} className="!text-12" />
          <span className="text-12 text-ink-2">
            {log.uploadedBy}, <Time at={log.uploadedAt} />
            {of === 'joint' && log.change && (
              <>
                {', for '}
                <TextLink className="num" to={paths.changeReview(log.change)}>{log.change}</TextLink>
              </>
            )}
          </span>
        </li>
      ))}
    </ul>
  )
}
