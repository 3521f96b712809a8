export type KillMode = 'before' | 'during' | 'after'

/** When the child is to die: at this step since it was armed, counted from 1; or right after the COMMIT of the transaction that ran a statement with this text. */
export type Kill = { at: number; mode: KillMode } | { committed: string }

/** What the child is asked; each with a number that its answer bears. */
export type Asked = { id: number } & Ask

export type Ask =
  | { do: 'open'; folder: string }
  | { do: 'close' }
  | { do: 'prepare'; password: string }
  | { do: 'check' }
  | { do: 'arm'; kill: Kill | null }
  | { do: 'steps' }
  /** resident memory, bytes, after collecting what can be collected */
  | { do: 'memory' }
  /** serves a bare point read beside the program, for comparison; answers its port */
  | { do: 'bare' }
  | { do: 'fill'; folder: string }
  /** reads a file without bringing it to the present schema */
  | { do: 'look'; folder: string }
  | { do: 'migrate'; folder: string; rebuild: boolean; kill: Kill | null }

/** What a database holds, to be compared before and after. */
export interface Summary {
  entries: number
  releases: number
  signatures: number
  checkpoints: number
  receipts: number
  firmwareImages: number
}

export interface Checked {
  faults: string[]
  summary: Summary
}
