import { useWindowVirtualizer } from '@tanstack/react-virtual'
import { useLayoutEffect, useRef, useState, useSyncExternalStore } from 'react'
import type { RefObject } from 'react'

/** A table with more rows than this keeps only those near the window in the page. */
export const mostRowsInPage = 120

const onPaper = typeof window.matchMedia === 'function' ? window.matchMedia('print') : null
const subscribe = (listener: () => void) => {
  onPaper?.addEventListener('change', listener)
  return () => onPaper?.removeEventListener('change', listener)
}
/** Paper shows every row. */
const usePrinting = () => useSyncExternalStore(subscribe, () => onPaper?.matches ?? false)

export interface RowWindow {
  /** places of the rows that are in the page; null: all of them */
  shown: { index: number; ref: (row: HTMLTableRowElement | null) => void }[] | null
  /** height of what is left out above and below, px */
  before: number
  after: number
  /** widths of the columns, px, kept once they were laid out: rows that come and go must not move them */
  widths: readonly number[] | null
  /** brings a row into the page and gives it the focus */
  goTo: (index: number) => void
}

/** Which rows of a long table are in the page. `frame` holds the table. */
export function useRowWindow(frame: RefObject<HTMLDivElement | null>, { count, columns, rowHeight }: { count: number; columns: number; rowHeight: number }): RowWindow {
  const printing = usePrinting()
  const long = count > mostRowsInPage && !printing
  const [top, setTop] = useState(0)
  const [widths, setWidths] = useState<number[] | null>(null)
  const wide = useRef(0)
  const rows = useWindowVirtualizer({ enabled: long, count, estimateSize: () => rowHeight, overscan: 16, scrollMargin: top, measureElement: (row) => row.getBoundingClientRect().height || rowHeight })

  useLayoutEffect(() => {
    const element = frame.current
    if (!long || !element) return
    const measure = () => {
      const body = element.querySelector('tbody')!
      setTop(body.getBoundingClientRect().top + window.scrollY)
      if (wide.current === element.clientWidth) return
      wide.current = element.clientWidth
      // Let the columns find their widths anew, then keep them.
      setWidths(null)
      requestAnimationFrame(() => setWidths([...element.querySelectorAll('thead th')].map((th) => th.getBoundingClientRect().width)))
    }
    measure()
    const observer = new ResizeObserver(measure)
    observer.observe(element)
    return () => observer.disconnect()
  }, [frame, long, columns])

  const items = rows.getVirtualItems()
  const goTo = (index: number) => {
    rows.scrollToIndex(index, { align: 'auto' })
    requestAnimationFrame(() => requestAnimationFrame(() => frame.current?.querySelector<HTMLElement>(`tr[data-index='${index}'] [data-row-handle], tr[data-index='${index}'][data-row-handle]`)?.focus()))
  }
  if (!long) return { shown: null, before: 0, after: 0, widths: null, goTo }
  return {
    shown: items.map(({ index }) => ({ index, ref: rows.measureElement })),
    before: items.length > 0 ? items[0].start - top : 0,
    after: items.length > 0 ? rows.getTotalSize() - (items[items.length - 1].end - top) : 0,
    widths,
    goTo,
  }
}
