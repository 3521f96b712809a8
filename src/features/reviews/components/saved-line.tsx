import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'

export interface OthersSave {
  by: string
  at: string
  /** places in words: "Velocity gain of the Knee family" */
  places: readonly string[]
}

/** What somebody else saved last, while this page is open. It stands at the foot of the window, so that nothing moves under the hands of who types. */
export function SavedLine({ saved, onSeen }: { saved: OthersSave | null; onSeen: () => void }) {
  return (
    <div role="status" className="no-print pointer-events-none fixed inset-x-0 bottom-4 z-20 flex justify-center px-4">
      {saved && (
        <p className="pointer-events-auto flex max-w-[720px] flex-wrap items-baseline gap-x-4 border border-rule border-l-[3px] border-l-brass bg-sheet px-4 py-2 text-13">
          <span>
            <b>{saved.by}</b> saved {wordsOf(saved.places)} at <Time at={saved.at} style="clock" />. It stands here now.
          </span>
          <button type="button" className="link" onClick={onSeen}>
            seen
          </button>
        </p>
      )}
    </div>
  )
}

const MOST = 3

function wordsOf(places: readonly string[]): string {
  if (places.length === 0) return 'comments or layout of the text'
  if (places.length <= MOST) return places.join(', ')
  return `${places.slice(0, MOST).join(', ')} and ${count(places.length - MOST, 'more value')}`
}
