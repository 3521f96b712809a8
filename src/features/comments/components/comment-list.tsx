import type { UseQueryResult } from '@tanstack/react-query'
import { useState, type RefObject } from 'react'
import type { CommentPlace, CommentsView } from '../../../../shared/contract/comments.ts'
import { fieldError } from '../../../lib/api-client.ts'
import { Region } from '../../../components/layout/region.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { useWriteComment } from '../mutations.ts'
import { threadsOf } from '../threads.ts'
import { CommentField } from './comment-field.tsx'
import { CommentThread } from './comment-thread.tsx'

export interface CommentListProps {
  change: string
  query: UseQueryResult<CommentsView>
  people: readonly { id: number; name: string }[]
  /** where the next comment is hung, and what that is called */
  on: { place: CommentPlace; title: string }
  /** back to the whole change */
  onWhole: () => void
  /** the comment is written */
  onWritten: () => void
  fieldRef: RefObject<HTMLTextAreaElement | null>
  /** leads to a place on the page; null where there is none */
  placeOf: (place: CommentPlace) => (() => void) | null
}

/** Comments of a change, oldest first, and the field for the next one. Open ones keep it from being signed. */
export function CommentList({ change, query, people, on, onWhole, onWritten, fieldRef, placeOf }: CommentListProps) {
  const [text, setText] = useState('')
  const write = useWriteComment(change)
  const send = () => {
    if (text.trim() !== '' && !write.isPending)
      write.mutate({ text, on: on.place }, { onSuccess: () => {
        setText('')
        onWritten()
      } })
  }
  const open = query.data?.open ?? 0
  return (
    <section aria-label="comments" id="comments" className="scroll-mt-4">
      <SectionHeading aux={open > 0 ? `${open} open` : undefined}>Comments</SectionHeading>
      <Region query={query} what="the comments" isEmpty={(v) => v.comments.length === 0 && !v.may.write.allowed} empty={<p className="py-2 text-13 text-ink-2">Nobody wrote a comment.</p>}>
        {(view) => (
          <>
            <ol>
              {threadsOf(view.comments).map((t) => (
                <CommentThread key={t.head.number} change={change} thread={t} people={people} mayWrite={view.may.write.allowed} onPlace={placeOf(t.head.on)} />
              ))}
            </ol>
            {view.may.write.allowed && (
              <form
                className="no-print mt-3 grid gap-2"
                onSubmit={(event) => {
                  event.preventDefault()
                  send()
                }}
              >
                <CommentField
                  fieldRef={fieldRef}
                  label={on.place.kind === 'change' ? 'Comment on the change' : `Comment on ${on.title}`}
                  placeholder="@ names a person; click a row's mark to hang it there"
                  value={text}
                  onChange={setText}
                  people={people}
                  error={fieldError(write.error, '/text') ?? fieldError(write.error, '/on/pointer') ?? fieldError(write.error, '/on/finding')}
                  onSend={send}
                />
                <div className="flex flex-wrap items-center gap-2">
                  <Button small type="submit" unavailable={text.trim() === '' ? 'Write something first.' : null} pending={write.isPending}>
                    Write the comment
                  </Button>
                  {on.place.kind !== 'change' && (
                    <button type="button" className="link text-13" onClick={onWhole}>
                      on the whole change instead
                    </button>
                  )}
                </div>
                <ProblemPanel problem={write.error} shown={['/text', '/on/pointer', '/on/finding']} />
              </form>
            )}
          </>
        )}
      </Region>
    </section>
  )
}
