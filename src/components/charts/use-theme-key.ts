import { useSyncExternalStore } from 'react'

/** A key that changes when light turns to dark or back, so that canvases are drawn again. */
export function useThemeKey(): string {
  return useSyncExternalStore(subscribe, read, () => 'light')
}

const DARK = '(prefers-color-scheme: dark)'

function subscribe(changed: () => void): () => void {
  const media = typeof matchMedia === 'function' ? matchMedia(DARK) : null
  media?.addEventListener('change', changed)
  const observer = new MutationObserver(changed)
  observer.observe(document.documentElement, { attributes: true, attributeFilter: ['data-theme'] })
  return () => {
    media?.removeEventListener('change', changed)
    observer.disconnect()
  }
}

function read(): string {
  const chosen = document.documentElement.dataset.theme
  if (chosen === 'light' || chosen === 'dark') return chosen
  return typeof matchMedia === 'function' && matchMedia(DARK).matches ? 'dark' : 'light'
}
