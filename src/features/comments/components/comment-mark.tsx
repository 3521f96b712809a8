import type { CommentPlace, CommentView } from '../../../../shared/contract/comments.ts'
import { count } from '../../../lib/format.ts'
import { countAt } from '../threads.ts'

export interface CommentMarkProps {
  comments: readonly CommentView[]
  place: CommentPlace
  /** what the place is called */
  title: string
  /** opens the comments there, or a new one */
  onOpen: () => void
  mayWrite: boolean
}

/** Comments hung on a place: how many, filled while one is open. Empty, it hangs the first one there. */
export function CommentMark({ comments, place, title, onOpen, mayWrite }: CommentMarkProps) {
  const { all, open } = countAt(comments, place)
  if (all === 0 && !mayWrite) return null
  const words = all === 0 ? `comment on ${title}` : `${count(all, 'comment')} on ${title}, ${open === 0 ? 'answered' : `${open} open`}`
  return (
    <button type="button" aria-label={words} title={words} className="no-print inline-flex h-7 min-w-7 flex-none items-center justify-center gap-1 border-0 bg-transparent px-1 text-slate" onClick={onOpen}>
      <svg width="15" height="14" viewBox="0 0 15 14" aria-hidden="true">
        <path d="M1 1.2h13v8.3H7l-3.4 3.3V9.5H1z" fill={open > 0 ? 'currentColor' : 'none'} stroke={all === 0 ? 'var(--rule)' : 'currentColor'} strokeWidth="1.3" strokeLinejoin="round" />
      </svg>
      {all > 0 && <span className="num text-12">{all}</span>}
    </button>
  )
}
