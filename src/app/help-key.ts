/** What stands together on a page: help beside the focus is looked for in the nearest of them. */
const together = '.value-cell, [data-help-scope], tr, li, dialog, section'

/** The question mark that explains the thing the focus is on; null when nothing there has one. */
export function helpBeside(focus: Element | null): HTMLElement | null {
  for (let scope = focus?.closest(together) ?? null; scope; scope = scope.parentElement?.closest(together) ?? null) {
    const found = scope.querySelector<HTMLElement>('[data-help]')
    if (found) return found
  }
  return document.querySelector<HTMLElement>("[data-help='chosen']")
}
