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
  /** entries that the reader may read and that fit what was asked */
  total: number
  /** every act that stands in the ledger, for the filter */
  acts: string[]
}

export type LedgerVerdict = { holds: true; entries: number; lastHash: string } | { holds: false; entries: number; sequence: number; why: string }
