import type { ChangeEventView } from '../../../../shared/contract/changes.ts'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Time } from '../../../components/ui/time.tsx'

/** Every step in the life of the change: what, who, when, and the reason given. */
export function History({ events, actions }: { events: readonly ChangeEventView[]; actions?: React.ReactNode }) {
  return (
    <section aria-label="history of the change">
      <SectionHeading actions={actions}>History</SectionHeading>
      <ol className="mt-1">
        {events.map((e, i) => (
          <li key={i} className="grid grid-cols-[12ch_1fr] gap-x-3 border-b border-hairline py-[6px] text-13">
            <span className="text-ink-2">
              <Time at={e.at} />
            </span>
            <div>
              <b className={e.kind === 'returned' || e.kind === 'signature void' || e.kind === 'cancelled' ? 'text-oxide' : ''}>{e.kind}</b> {e.person ?? 'by Detent itself'}
              {e.note && <p className="text-ink-2">{e.kind === 'returned' || e.kind === 'cancelled' ? `“${e.note}”` : e.note}</p>}
            </div>
          </li>
        ))}
      </ol>
    </section>
  )
}
