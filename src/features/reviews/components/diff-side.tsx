import type { DiffRow } from '../../../../shared/contract/reviews.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { Bytes } from '../../../components/ui/bytes.tsx'
import { OriginMark } from '../../../components/ui/origin-mark.tsx'
import { formatExact, formatFixed, formatHex } from '../../../lib/format.ts'

/** One side of a row as text; "none" where the value was not there. */
export const sideText = (side: DiffRow['before']): string => (side === null ? 'none' : side.value === 'true' ? 'on' : side.value === 'false' ? 'off' : formatExact(side.value))

export const percentText = (row: DiffRow): string => (row.changePercent === null || row.changePercent === 0 ? '' : formatFixed(row.changePercent, Math.abs(row.changePercent) >= 99.95 ? 0 : 1, { plus: true }))

const numbers = (bytes: string): number[] => (bytes === '' ? [] : bytes.split(' ').map((b) => Number.parseInt(b, 16)))

/** "33 33 33 03 → 9A 99 99 05", the bytes that differ underlined. */
export function BytesChange({ row }: { row: DiffRow }) {
  const before = row.before ? numbers(row.before.bytes) : []
  const after = row.after ? numbers(row.after.bytes) : []
  if (before.length + after.length === 0) return null
  return (
    <span className="whitespace-nowrap">
      {before.length > 0 && (
        <>
          <span className="text-ink-2">
            <Bytes bytes={before} />
          </span>
          <Arrow />
        </>
      )}
      {after.length > 0 ? <Bytes bytes={after} before={before} /> : <span className="text-13 text-ink-2">not written</span>}
    </span>
  )
}

export function RegisterWords({ row }: { row: DiffRow }) {
  if (!row.register) return null
  return (
    <span className="whitespace-nowrap text-ink-2">
      <span className="num text-13">{formatHex(row.register.address)}</span> <span className="text-12">{row.register.encoding}</span>
    </span>
  )
}

/** Where the value comes from, when that alters. */
export function OriginChange({ row }: { row: DiffRow }) {
  if (!row.before || !row.after || row.before.origin === row.after.origin) return null
  return (
    <span className="whitespace-nowrap">
      <OriginMark origin={row.before.origin} />
      <Arrow />
      <OriginMark origin={row.after.origin} />
    </span>
  )
}
