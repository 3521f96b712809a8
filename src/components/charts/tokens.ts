/** A colour token as the page has it now. Canvases cannot take var(). */
export function token(name: string): string {
  return getComputedStyle(document.documentElement).getPropertyValue(`--${name}`).trim() || '#000000'
}
