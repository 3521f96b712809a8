import { useSyncExternalStore } from 'react'

const onPaper = typeof window.matchMedia === 'function' ? window.matchMedia('print') : null

const subscribe = (listener: () => void) => {
  onPaper?.addEventListener('change', listener)
  return () => onPaper?.removeEventListener('change', listener)
}

/** Whether the page is being laid out for paper, which shows every row. */
export const usePrinting = () => useSyncExternalStore(subscribe, () => onPaper?.matches ?? false)
