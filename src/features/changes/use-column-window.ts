import { defaultRangeExtractor, useVirtualizer, type Range } from '@tanstack/react-virtual'
import { useMemo } from 'react'
import type { RefObject } from 'react'

/** A column drawn, and how many before it are not. `index` past the last: only the gap at the end. */
export interface ColumnSpan {
  index: number
  gap: number
}

/** From so many columns on, only those in sight are drawn. */
export const DRAWN_WHOLE = 16
const OVERSCAN = 3

/** The columns drawn with the gaps between them. */
export function spansOf(drawn: readonly number[], count: number): ColumnSpan[] {
  const spans: ColumnSpan[] = []
  let next = 0
  for (const index of drawn) {
    spans.push({ index, gap: index - next })
    next = index + 1
  }
  if (next < count) spans.push({ index: count, gap: count - next })
  return spans
}

/** Which columns of a wide table are drawn: those in sight, a few beside them, and the one that keys act on, wherever it is. */
export function useColumnWindow(frame: RefObject<HTMLElement | null>, count: number, widths: { head: number; column: number }, kept: number): ColumnSpan[] {
  const whole = count <= DRAWN_WHOLE
  const virtual = useVirtualizer({
    horizontal: true,
    count,
    enabled: !whole,
    getScrollElement: () => frame.current,
    estimateSize: () => widths.column,
    overscan: OVERSCAN,
    initialRect: { width: 1000, height: 600 },
    rangeExtractor: (range: Range) => [...new Set([...defaultRangeExtractor(range), kept])].filter((k) => k >= 0).toSorted((a, b) => a - b),
  })
  const drawn = whole ? Array.from({ length: count }, (_, k) => k) : virtual.getVirtualItems().map((item) => item.index)
  const key = drawn.join()
  // eslint-disable-next-line react-hooks/exhaustive-deps
  return useMemo(() => spansOf(drawn, count), [key, count])
}
