import type { ReadingView } from '../../../../shared/contract/reviews.ts'
import { Key } from '../../../components/ui/key.tsx'
import { count } from '../../../lib/format.ts'

/** How much of what alters is read, by the reader and the others, and the keys that go through it. */
export function ReadingLine({ view, unread, kept, me, onNext }: { view: ReadingView; unread: number; kept: boolean; me: string; onNext: () => void }) {
  const others = view.people.filter((p) => p.name !== me)
  const marks = view.may.mark.allowed
  return (
    <div className="no-print mb-4 flex flex-wrap items-baseline gap-x-5 gap-y-1 border-y border-hairline py-[6px] text-13" aria-label="reading" role="group">
      {marks && (
        <span aria-live="polite">
          {unread === 0 ? <b>All {count(view.rows, 'row')} read</b> : <><b>{view.rows - unread} of {count(view.rows, 'row')} read</b>, signing needs all</>}
          {!kept && <span className="text-ink-2">, being kept</span>}
        </span>
      )}
      {others.length > 0 && <span className="text-ink-2">{others.map((p) => `${p.name} ${p.read === view.rows ? 'all' : p.read}`).join(', ')}</span>}
      {marks && unread > 0 && (
        <button type="button" className="link" onClick={onNext}>
          next unread
        </button>
      )}
      <span className="ml-auto hidden text-ink-2 md:inline">
        <Key>.</Key> next <Key>,</Key> previous{' '}
        {marks && (
          <>
            <Key>space</Key> read{' '}
          </>
        )}
        <Key>Enter</Key> comment
      </span>
    </div>
  )
}
