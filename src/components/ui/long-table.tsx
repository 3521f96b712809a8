import { useWindowVirtualizer } from '@tanstack/react-virtual'
import { useLayoutEffect, useRef, useState } from 'react'
import type { ReactNode, Ref } from 'react'
import type { RowWindow } from './row-window.ts'

export interface LongTableProps {
  count: number
  columns: number
  rowHeight: number
  draw: (frame: Ref<HTMLDivElement>, view: RowWindow) => ReactNode
}

/** Of a long table only the rows near the window are in the page. Its columns keep the widths they were first laid out with: rows that come and go must not move them. */
export default function LongTable({ count, columns, rowHeight, draw }: LongTableProps) {
  const [frame, setFrame] = useState<HTMLDivElement | null>(null)
  const [top, setTop] = useState(0)
  const [widths, setWidths] = useState<number[] | null>(null)
  const wide = useRef(0)
  const rows = useWindowVirtualizer({ count, estimateSize: () => rowHeight, overscan: 16, scrollMargin: top, measureElement: (row) => row.getBoundingClientRect().height || rowHeight })

  useLayoutEffect(() => {
    if (!frame) return
    const element = frame
    const measure = () => {
      setTop(element.querySelector('tbody')!.getBoundingClientRect().top + window.scrollY)
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
  }, [frame, columns])

  const items = rows.getVirtualItems()
  const goTo = (index: number) => {
    rows.scrollToIndex(index, { align: 'auto' })
    requestAnimationFrame(() => requestAnimationFrame(() => frame?.querySelector<HTMLElement>(`tr[data-index='${index}'] [data-row-handle], tr[data-index='${index}'][data-row-handle]`)?.focus()))
  }
  return draw(setFrame, {
    shown: items.map(({ index }) => ({ index, ref: rows.measureElement })),
    before: items.length > 0 ? items[0].start - top : 0,
    after: items.length > 0 ? rows.getTotalSize() - (items[items.length - 1].end - top) : 0,
    widths,
    goTo,
  })
}
