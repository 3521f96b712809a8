import type { AddressRow } from './address-rows.ts'

/** One thing on the map that the keyboard stops at: a word, bytes without one, or rows of them. */
export interface MapStop {
  address: number
  bytes: number
  row: number
  /** name of the word's first parameter; null where there is none to pick */
  parameter: string | null
}

/** Where the keyboard stops, in order of address: the part of a word that goes on from the row before is no stop of its own. */
export const stopsOf = (rows: readonly AddressRow[]): MapStop[] =>
  rows.flatMap((row, at): MapStop[] =>
    row.kind === 'free'
      ? [{ address: row.address, bytes: row.bytes, row: at, parameter: null }]
      : row.stretches.filter((s) => !s.continued).map((s) => ({ address: s.address, bytes: s.word?.bytes ?? s.bytes, row: at, parameter: s.word?.parameters[0]?.name ?? null })),
  )

/**
 * The stop a key leads to; null when the key leads nowhere. Left and right go by address, up and down to what lies above or below the
 * column, Home and End to the ends.
 */
export function nextStop(stops: readonly MapStop[], from: number, key: string, column: number): number | null {
  const at = stops.findIndex((s) => s.address === from)
  if (at < 0) return null
  if (key === 'ArrowRight') return at + 1 < stops.length ? stops[at + 1].address : null
  if (key === 'ArrowLeft') return at > 0 ? stops[at - 1].address : null
  if (key === 'Home') return stops[0].address
  if (key === 'End') return stops[stops.length - 1].address
  const step = key === 'ArrowDown' ? 1 : key === 'ArrowUp' ? -1 : 0
  if (step === 0) return null
  for (let row = stops[at].row + step; row >= 0 && row <= stops[stops.length - 1].row; row += step) {
    const inRow = stops.filter((s) => s.row === row)
    if (inRow.length === 0) continue
    return (inRow.findLast((s) => s.address % 16 <= column) ?? inRow[0]).address
  }
  return null
}
