import type { Present } from '../../../../shared/contract/presence.ts'
import { presentWords } from '../present-words.ts'

/** Who else has the change open now. */
export function PresenceLine({ present, className = '' }: { present: readonly Present[]; className?: string }) {
  return (
    <span role="status" className={`text-13 text-ink-2 ${className}`}>
      {present.length > 0 && (
        <>
          <svg width="10" height="10" viewBox="0 0 10 10" aria-hidden="true" className="mr-[6px] inline-block">
            <circle cx="5" cy="5" r="4" fill="var(--brass)" />
          </svg>
          with {presentWords(present)}
        </>
      )}
    </span>
  )
}
