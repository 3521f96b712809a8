/** Which rows are in the page: places of those, and who measures them; heights of what is left out, px; widths that the columns keep. */
export interface RowWindow {
  shown: { index: number; ref?: (row: HTMLTableRowElement | null) => void }[]
  before: number
  after: number
  widths: readonly number[] | null
  /** brings a row into the page and gives it the focus; null: they are all in it */
  goTo: ((index: number) => void) | null
}
