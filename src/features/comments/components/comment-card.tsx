import type { CommentView } from '../../../../shared/contract/comments.ts'
import { Time } from '../../../components/ui/time.tsx'
import { pieces } from '../naming.ts'

/** One comment: who, in what part, when, where it hangs, what it says. */
export function CommentCard({ comment, onPlace }: { comment: CommentView; onPlace: (() => void) | null }) {
  return (
    <div id={`comment-${comment.number}`} className="scroll-mt-16">
      <p className="flex flex-wrap items-baseline gap-x-2 text-13">
        <b>{comment.by}</b>
        <span className="text-ink-2">{comment.roles}</span>
        <span className="ml-auto text-12 text-ink-2">
          <Time at={comment.at} />
        </span>
      </p>
      {comment.about && comment.under === null && (
        <p className="text-12">
          {onPlace ? (
            <button type="button" className="link" onClick={onPlace}>
              {comment.about}
            </button>
          ) : (
            <span className="text-ink-2">{comment.about}</span>
          )}
        </p>
      )}
      <p className="mt-[2px] [overflow-wrap:anywhere] whitespace-pre-wrap">
        {pieces(comment.text, comment.named).map((p, i) => (p.named ? <b key={i} className="text-slate">{p.text}</b> : <span key={i}>{p.text}</span>))}
      </p>
    </div>
  )
}
