import type { CommentPlace, CommentView } from '../../../shared/contract/comments.ts'

/** A comment with what stands under it. */
export interface Thread {
  head: CommentView
  under: CommentView[]
}

export const threadsOf = (comments: readonly CommentView[]): Thread[] => comments.filter((c) => c.under === null).map((head) => ({ head, under: comments.filter((c) => c.under === head.number) }))

export const samePlace = (a: CommentPlace, b: CommentPlace): boolean =>
  a.kind === b.kind && (a.kind !== 'value' || (b.kind === 'value' && a.pointer === b.pointer)) && (a.kind !== 'finding' || (b.kind === 'finding' && a.finding === b.finding))

/** How many comments hang on a place, and how many of them are open. */
export function countAt(comments: readonly CommentView[], place: CommentPlace): { all: number; open: number } {
  const here = comments.filter((c) => c.under === null && samePlace(c.on, place))
  return { all: here.length, open: here.filter((c) => c.answered === null).length }
}
