import { useState } from 'react'
import type { ReactNode } from 'react'
import type { ChangeEventView, DraftPointView, SignatureView } from '../../../../shared/contract/changes.ts'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'
import { historyOf, type Step } from '../history-of.ts'

export interface HistoryProps {
  events: readonly ChangeEventView[]
  signatures: readonly SignatureView[]
  points: readonly DraftPointView[]
  /** one edit of a draft point in words */
  editWords: (edit: DraftPointView['edits'][number]) => string
  actions?: ReactNode
}

const grave = ['returned', 'signature void', 'cancelled']

/** Every step in the life of the change: what, who, when, the reason given, the signatures it voided, and the draft points between. */
export function History({ events, signatures, points, editWords, actions }: HistoryProps) {
  return (
    <section aria-label="history of the change">
      <SectionHeading actions={actions}>History</SectionHeading>
      <ol className="mt-1">
        {historyOf(events, signatures, points).map((step, i) => (
          <li key={i} className="grid grid-cols-[12ch_minmax(0,1fr)] gap-x-3 border-b border-hairline py-[6px] text-13">
            <span className="text-ink-2">
              <Time at={step.kind === 'event' ? step.event.at : step.points[0].at} />
            </span>
            {step.kind === 'event' ? <EventStep {...step} /> : <PointsStep points={step.points} editWords={editWords} />}
          </li>
        ))}
      </ol>
    </section>
  )
}

function EventStep({ event, voided }: Step & { kind: 'event' }) {
  return (
    <div>
      <b className={grave.includes(event.kind) ? 'text-oxide' : ''}>{event.kind}</b> {event.person ?? 'by Detent itself'}
      {event.note && <p className="text-ink-2">{event.kind === 'returned' || event.kind === 'cancelled' ? `“${event.note}”` : event.note}</p>}
      {voided.map((s) => (
        <p key={`${s.person} ${s.at}`} className="text-oxide">
          <s>{s.meaning}</s> of {s.person}, <Time at={s.at} />, is void from here on
        </p>
      ))}
    </div>
  )
}

/** Saves of one person in a row: folded into a line that opens. */
function PointsStep({ points, editWords }: { points: readonly DraftPointView[]; editWords: HistoryProps['editWords'] }) {
  const [open, setOpen] = useState(false)
  const last = points[points.length - 1]
  return (
    <div className="text-ink-2">
      <button type="button" className="link" aria-expanded={open} onClick={() => setOpen(!open)}>
        {count(points.length, 'draft point')}
      </button>{' '}
      {last.by}
      {points.length > 1 && (
        <>
          , until <Time at={last.at} />
        </>
      )}
      {open && (
        <ol className="mt-1">
          {points.map((p) => (
            <li key={p.number}>
              <span className="num">{p.number}</span> <Time at={p.at} style="clock" />, {p.edits.length === 0 ? (p.number === 1 ? 'as it was opened' : 'comments or layout of the text') : p.edits.slice(0, 6).map(editWords).join('; ')}
              {p.edits.length > 6 && ` and ${count(p.edits.length - 6, 'more value')}`}
            </li>
          ))}
        </ol>
      )}
    </div>
  )
}
