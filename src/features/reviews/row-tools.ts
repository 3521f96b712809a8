import type { ReactNode } from 'react'
import type { Marked, RowEffect } from '../../../shared/contract/reviews.ts'

/** A row with what it is called. */
export type NamedRow = Marked & { title: string }

/** What the rows of the page are given to work with. */
export interface RowTools {
  /** keys of the rows read; null for whoever keeps no marks */
  read: ReadonlySet<string> | null
  onRead: (row: Marked, read: boolean) => void
  /** what a row's value does alone; null where nothing is released to compare with */
  effects: ReadonlyMap<string, RowEffect> | null
  /** at the end of a row: its comments */
  aside: (row: NamedRow) => ReactNode
  /** the one row in the tab order */
  tabKey: string | null
  onFocus: (key: string) => void
}

/** What makes an element a row that the keys move to. */
export const rowProps = (tools: RowTools, { key }: Marked) => ({
  'data-row-key': key,
  tabIndex: tools.tabKey === key ? 0 : -1,
  onFocus: () => tools.onFocus(key),
})
