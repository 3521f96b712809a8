import { Type, type Static } from '@sinclair/typebox'
import type { Allowed } from './people.ts'

const strict = { additionalProperties: false }

/** What a comment hangs on: the whole change, a place in the machine set, or a finding of the check. */
export const CommentPlace = Type.Union([
  Type.Object({ kind: Type.Literal('change') }, strict),
  Type.Object({ kind: Type.Literal('value'), pointer: Type.String({ pattern: '^(?:/(?:[^~/]|~0|~1)*)+$', maxLength: 400 }) }, strict),
  Type.Object({ kind: Type.Literal('finding'), finding: Type.String({ minLength: 1, maxLength: 200 }) }, strict),
])
export type CommentPlace = Static<typeof CommentPlace>

export const commentLength = 4000

/** A name after an at sign, as people are called here, names that person: they are told by mail. */
export const WriteComment = Type.Object(
  {
    text: Type.String({ minLength: 1, maxLength: commentLength, pattern: '^(?=[^]*\\S)[^\\u0000]*$' }),
    on: CommentPlace,
    /** number of the comment it stands under; it then hangs where that one does, and is never open by itself */
    under: Type.Optional(Type.Integer({ minimum: 1 })),
  },
  strict,
)
export type WriteComment = Static<typeof WriteComment>

export interface CommentView {
  /** counted within the change */
  number: number
  by: string
  /** roles held on the machine when it was written */
  roles: string
  at: string
  text: string
  on: CommentPlace
  /** what it hangs on, in words as they were when it was written; empty for the whole change */
  about: string
  /** printed names of the people it names */
  named: string[]
  /** number of the comment it stands under */
  under: number | null
  /** marked answered; null while it is open, and for those under another */
  answered: { by: string; at: string } | null
  may: { answer: Allowed }
}

/** GET /changes/:change/comments: oldest first. */
export interface CommentsView {
  comments: CommentView[]
  /** comments that keep the change from being signed */
  open: number
  may: { write: Allowed }
}

/** POST /changes/:change/comments */
export interface CommentWritten extends CommentsView {
  /** number of the comment just written */
  written: number
}

/** GET /comments/naming-me: open comments of changes under way that name the reader and have no word of theirs after. */
export interface NamedView {
  change: string
  changeTitle: string
  machineName: string
  changeNumber: number
  comment: number
  by: string
  at: string
  text: string
  about: string
}
