import type { BoardState } from './board-shape.tsx'

export interface SpineTap {
  key: string
  /** The joint's page. */
  to: string
  joint: string
  /** Seven-bit address. */
  address: number
  /** What is known of the board there; "silent": it did not answer at this address. */
  board: BoardState | 'silent'
  /** A change of this joint waits. */
  waiting?: boolean
}

export type SpineRow = { kind: 'free'; from: number; count: number } | { kind: 'taps'; address: number; taps: SpineTap[] }

/** Addresses a board may have; the others are reserved. Source: UM10204, table of reserved addresses. */
const FIRST = 0x08
const LAST = 0x77

/** Taps in address order, those of one address together, with the free stretches between, before and after. */
export function spineRows(taps: readonly SpineTap[]): SpineRow[] {
  const byAddress = new Map<number, SpineTap[]>()
  for (const tap of taps.toSorted((a, b) => a.address - b.address)) byAddress.set(tap.address, [...(byAddress.get(tap.address) ?? []), tap])
  const rows: SpineRow[] = []
  let next = FIRST
  for (const [address, sharing] of byAddress) {
    if (address > next && next <= LAST) rows.push({ kind: 'free', from: next, count: Math.min(address, LAST + 1) - next })
    rows.push({ kind: 'taps', address, taps: sharing })
    next = Math.max(next, address + 1)
  }
  if (next <= LAST) rows.push({ kind: 'free', from: next, count: LAST + 1 - next })
  return rows
}
