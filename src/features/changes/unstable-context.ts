import { createContext } from 'react'
import type { Stretch } from '../../../shared/contract/checks.ts'

/** Where along the rulers of one joint it would not be stable, all else as saved. */
export interface UnstableStretches {
  /** the joint they are of; null while none is known */
  joint: string | null
  /** by parameter */
  stretches: ReadonlyMap<string, readonly Stretch[]>
  /** the draft was altered since */
  stale: boolean
}

export const noStretches: UnstableStretches = { joint: null, stretches: new Map(), stale: false }

export const UnstableContext = createContext<UnstableStretches>(noStretches)
