import type { ChangeState } from './changes.ts'

/** Pages of a change that somebody may have open. */
export const presencePages = ['values', 'check', 'review'] as const
export type PresencePage = (typeof presencePages)[number]

export interface Present {
  name: string
  page: PresencePage
}

/**
 * GET /changes/:change/events?page=, `text/event-stream`: each message's data is one of these as JSON.
 *
 * `present` comes at once and whenever somebody comes or goes; it leaves the reader out. The others tell of an act that is done.
 */
export type ChangeNews =
  | { kind: 'present'; people: Present[] }
  | { kind: 'saved'; by: string; at: string; revision: number; pointers: string[] }
  | { kind: 'moved'; by: string; at: string; revision: number; state: ChangeState }
  | { kind: 'comment'; by: string; at: string; comment: number }
