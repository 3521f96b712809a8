export interface Listening {
  /** a stream that the server closed for good is opened again after this, ms */
  tryAgain: number
  onOpen: () => void
  onData: (data: string) => void
  /** the stream broke; the browser, or this, tries again */
  onBroken: () => void
  /** nothing is heard from now on: the page went out of view, or listening ended */
  onClosed: () => void
}

/**
 * Listens to a stream of the server while the page is in view: a browser holds few connections to one server.
 *
 * @returns the way to end it
 */
export function listenInView(url: string, { tryAgain, onOpen, onData, onBroken, onClosed }: Listening): () => void {
  let source: EventSource | null = null
  let timer: ReturnType<typeof setTimeout> | undefined
  const close = () => {
    clearTimeout(timer)
    source?.close()
    source = null
    onClosed()
  }
  const open = () => {
    close()
    source = new EventSource(url)
    source.onopen = onOpen
    source.onmessage = ({ data }) => onData(data as string)
    source.onerror = () => {
      onBroken()
      if (source?.readyState === EventSource.CLOSED) timer = setTimeout(open, tryAgain)
    }
  }
  const look = () => (document.visibilityState === 'visible' ? open() : close())
  look()
  document.addEventListener('visibilitychange', look)
  return () => {
    document.removeEventListener('visibilitychange', look)
    close()
  }
}
