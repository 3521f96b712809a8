/** What waits for a person besides changes and boards: where it leads is told by keys, never by an address. */
export type DeskTask = { since: string; title: string; why: string } & (
  | { kind: 'policy'; machine: string }
  | { kind: 'firmware'; line: string; version: string }
  | { kind: 'signing right'; person: number }
  | { kind: 'mail' }
  | { kind: 'log'; machine: string; evidence: number }
  | { kind: 'concession'; machine: string; release: string }
)

export interface DeskView {
  /** oldest first */
  tasks: DeskTask[]
  /** keys of changes that the person signed in their present round: nothing of them waits for this person any more */
  signed: string[]
}
