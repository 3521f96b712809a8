/** Hands the reader a file made in the browser. */
export function downloadText(name: string, text: string, type = 'text/csv'): void {
  save(name, new Blob([text], { type: `${type};charset=utf-8` }))
}

/** A canvas as PNG. */
export function downloadCanvas(name: string, canvas: HTMLCanvasElement): void {
  canvas.toBlob((png) => {
    if (png) save(name, png)
  }, 'image/png')
}

function save(name: string, content: Blob): void {
  const url = URL.createObjectURL(content)
  const link = document.createElement('a')
  link.href = url
  link.download = name
  link.click()
  // The browser reads the address after this turn; one minute is ample.
  setTimeout(() => URL.revokeObjectURL(url), 60_000)
}

/** RFC 4180: CRLF, quotes doubled where a field needs them. Numbers in full, with a point. */
export function csvText(head: readonly string[], rows: readonly (readonly (string | number | null | undefined)[])[]): string {
  const field = (v: string | number | null | undefined) => {
    const text = v === null || v === undefined ? '' : String(v)
    return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text
  }
  return [head, ...rows].map((r) => r.map(field).join(',')).join('\r\n') + '\r\n'
}
