import { useEffect, useEffectEvent, type RefObject } from 'react'
import { goToRow, shownRows } from './go-to-row.ts'

const isTyping = (target: EventTarget | null) => target instanceof HTMLElement && target.closest('input, textarea, select, [contenteditable], [role="slider"], [role="menu"], dialog') !== null

export interface RowKeys {
  isRead: (key: string) => boolean
  /** null for whoever keeps no marks */
  onRead: ((key: string) => void) | null
  onOpen: (key: string) => void
}

/**
 * `.` and `,` go to the next and the previous row; on a row, space marks it as read and goes on to the next one that is not, Enter opens its
 * comments. Space never takes a mark away: pressed once too often it would undo what was read.
 *
 * They work while the focus is in the place, or nowhere; never while somebody types.
 */
export function useRowKeys(place: RefObject<HTMLElement | null>, keys: RowKeys) {
  const onKey = useEffectEvent((event: KeyboardEvent) => {
    const here = place.current
    if (!here || event.defaultPrevented || event.ctrlKey || event.metaKey || event.altKey || isTyping(event.target)) return
    const { activeElement: active } = document
    if (active !== document.body && !here.contains(active)) return
    const rows = shownRows(here)
    const at = rows.findIndex((r) => r === active || r.contains(active))
    const isUnread = (r: HTMLElement) => !keys.isRead(r.dataset.rowKey!)
    const onRow = at >= 0 && rows[at] === active
    const key = at >= 0 ? rows[at].dataset.rowKey! : null
    const step = event.key === '.' || (onRow && event.key === 'ArrowDown') ? 1 : event.key === ',' || (onRow && event.key === 'ArrowUp') ? -1 : 0
    if (step !== 0) goToRow(at < 0 ? (rows.find(isUnread) ?? rows[0]) : rows[Math.min(Math.max(at + step, 0), rows.length - 1)])
    else if (onRow && key !== null && event.key === ' ' && keys.onRead) {
      keys.onRead(key)
      goToRow([...rows.slice(at + 1), ...rows.slice(0, at)].find(isUnread))
    } else if (onRow && key !== null && event.key === 'Enter') keys.onOpen(key)
    else return
    event.preventDefault()
  })
  useEffect(() => {
    const listener = (event: KeyboardEvent) => onKey(event)
    document.addEventListener('keydown', listener)
    return () => document.removeEventListener('keydown', listener)
  }, [])
}
