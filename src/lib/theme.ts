import { useSyncExternalStore } from 'react'

export type Theme = 'system' | 'light' | 'dark'
export const themes: readonly Theme[] = ['system', 'light', 'dark']

const KEY = 'detent-theme'
const listeners = new Set<() => void>()

function stored(): Theme {
  try {
    const value = localStorage.getItem(KEY)
    return value === 'light' || value === 'dark' ? value : 'system'
  } catch {
    // Storage may be closed to the page; the reader's system setting serves then.
    return 'system'
  }
}

let current: Theme = 'system'

function show(theme: Theme) {
  current = theme
  if (theme === 'system') delete document.documentElement.dataset.theme
  else document.documentElement.dataset.theme = theme
  for (const listener of listeners) listener()
}

/** Shows the theme chosen on this computer before; call before the first paint. */
export const startTheme = () => show(stored())

export function setTheme(theme: Theme) {
  try {
    if (theme === 'system') localStorage.removeItem(KEY)
    else localStorage.setItem(KEY, theme)
  } catch {
    // It holds until the page is closed.
  }
  show(theme)
}

export const useTheme = (): Theme =>
  useSyncExternalStore(
    (listener) => {
      listeners.add(listener)
      return () => void listeners.delete(listener)
    },
    () => current,
  )
