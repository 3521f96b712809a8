/** A table and a list hold the same rows; one of them is shown. */
const isShown = (element: HTMLElement) => typeof element.checkVisibility !== 'function' || element.checkVisibility()

/** Rows of what alters as they are shown, in the order of the page. */
export const shownRows = (place: ParentNode): HTMLElement[] => [...place.querySelectorAll<HTMLElement>('[data-row-key]')].filter(isShown)

/** Puts the focus on a row, and the row into view. */
export function goToRow(row: HTMLElement | undefined, block: ScrollLogicalPosition = 'nearest') {
  row?.focus({ preventScroll: true })
  row?.scrollIntoView?.({ block })
}

export const goToRowOf = (key: string, place: ParentNode = document) => goToRow(shownRows(place).find((r) => r.dataset.rowKey === key), 'center')
