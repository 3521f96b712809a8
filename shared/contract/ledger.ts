/** One entry of the ledger, as read. */
export interface LedgerEntryView {
  sequence: number
  at: string
  person: string
  act: string
  machine: string | null
  subject: Record<string, string | number>
  details: Record<string, unknown>
  hash: string
  previousHash: string
}

export interface LedgerPage {
  entries: LedgerEntryView[]
  /** sequence to ask before for the next page; null at the end */
  next: number | null
  total: number
}

export type LedgerVerdict = { holds: true; entries: number; lastHash: string } | { holds: false; entries: number; sequence: number; why: string }
