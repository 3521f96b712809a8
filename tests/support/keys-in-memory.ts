import type { KeyObject } from 'node:crypto'
import type { KeyStore } from '../../server/modules/keys/key-store.ts'

/** A key store that forgets everything at the end of the test. */
export function keysInMemory(inUse: KeyObject | null = null): KeyStore {
  let beside: KeyObject | null = null
  return {
    inUse: () => inUse,
    laidBeside: () => beside,
    lay: (key) => void (beside = key),
    adopt: () => {
      inUse = beside
      beside = null
    },
    takeAway: () => void (beside = null),
  }
}
