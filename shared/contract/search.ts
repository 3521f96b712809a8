/** Kinds of finds, in the order they are shown. */
export const findKinds = ['machine', 'joint', 'family', 'bus', 'value', 'register', 'board', 'change', 'release', 'firmware', 'hash', 'person'] as const
export type FindKind = (typeof findKinds)[number]

/** The page that a find leads to, by what stands in its address. */
export type FindPlace =
  | { page: 'machine'; machine: string }
  | { page: 'joint'; machine: string; joint: string }
  | { page: 'family'; machine: string; family: string }
  | { page: 'bus'; machine: string; bus: string }
  | { page: 'board'; serial: string }
  | { page: 'change'; change: string; draft: boolean }
  | { page: 'release'; machine: string; version: string }
  | { page: 'firmware'; line: string; version: string }
  | { page: 'ledger'; entry: number }
  | { page: 'person'; person: number }

export interface Find {
  /** what is called like that: "L1 knee", "Velocity gain", "H-0318" */
  name: string
  /** where it stands and what it is */
  note: string
  at: FindPlace
}

export interface FindGroup {
  kind: FindKind
  finds: Find[]
  /** there are more than are given */
  more: boolean
}

export interface SearchAnswer {
  /** the words that were searched for, as they were read */
  asked: string
  groups: FindGroup[]
}

/** Longest text that is searched for: a SHA-256 in groups of four and a little. */
export const longestAsked = 100
/** Finds of one kind that a list under the field holds, and a page. */
export const findsInList = 5
export const findsOnPage = 50
