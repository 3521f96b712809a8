import { useRef, useState } from 'react'
import { fieldError } from '../../../lib/api-client.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { useMarkAnswered, useWriteComment } from '../mutations.ts'
import type { Thread } from '../threads.ts'
import { CommentCard } from './comment-card.tsx'
import { CommentField } from './comment-field.tsx'

export interface CommentThreadProps {
  change: string
  thread: Thread
  people: readonly { id: number; name: string }[]
  mayWrite: boolean
  /** leads to what it hangs on; null when that is the whole change, or no longer on the page */
  onPlace: (() => void) | null
}

/** A comment with what was written under it, and whether it is answered. An answered one folds to its first line. */
export function CommentThread({ change, thread: { head, under }, people, mayWrite, onPlace }: CommentThreadProps) {
  const [writing, setWriting] = useState(false)
  const [text, setText] = useState('')
  const field = useRef<HTMLTextAreaElement>(null)
  const write = useWriteComment(change)
  const answer = useMarkAnswered(change)
  const send = () => {
    if (text.trim() !== '' && !write.isPending)
      write.mutate({ text, on: head.on, under: head.number }, { onSuccess: () => {
        setText('')
        setWriting(false)
      } })
  }
  return (
    <li className="border-b border-hairline py-[10px]" aria-label={`comment ${head.number} by ${head.by}`}>
      <CommentCard comment={head} onPlace={onPlace} />
      {under.length > 0 && (
        <ol className="mt-2 grid gap-2 border-l border-hairline pl-3">
          {under.map((c) => (
            <li key={c.number}>
              <CommentCard comment={c} onPlace={null} />
            </li>
          ))}
        </ol>
      )}
      <div className="mt-1 flex flex-wrap items-center gap-x-4 text-13">
        {head.answered ? (
          <>
            <FindingMark level="pass" size={13}>answered</FindingMark>
            <span className="text-12 text-ink-2">
              {head.answered.by}, <Time at={head.answered.at} />
            </span>
          </>
        ) : (
          <>
            <span className="font-medium text-brass">open</span>
            {head.may.answer.allowed && (
              <button type="button" className="link no-print" aria-busy={answer.isPending || undefined} onClick={() => answer.isPending || answer.mutate(head.number)} aria-label={`mark answered, comment ${head.number}`}>
                mark answered
              </button>
            )}
            {mayWrite && !writing && (
              <button type="button" className="link no-print" aria-label={`write under it, comment ${head.number}`} onClick={() => {
                setWriting(true)
                queueMicrotask(() => field.current?.focus())
              }}>
                write under it
              </button>
            )}
          </>
        )}
      </div>
      <ProblemPanel problem={answer.error} />
      {writing && !head.answered && (
        <form
          className="no-print mt-2 grid gap-2"
          onSubmit={(event) => {
            event.preventDefault()
            send()
          }}
        >
          <CommentField fieldRef={field} label={`Under comment ${head.number}`} value={text} onChange={setText} people={people} error={fieldError(write.error, '/text')} onSend={send} rows={2} />
          <div className="flex gap-2">
            <Button small type="submit" unavailable={text.trim() === '' ? 'Write something first.' : null} pending={write.isPending}>
              Write it
            </Button>
            <Button small onClick={() => setWriting(false)}>
              Leave it
            </Button>
          </div>
          <ProblemPanel problem={write.error} shown={['/text']} />
        </form>
      )}
    </li>
  )
}
