import { useEffect } from 'react'

/** Ctrl or ⌘ with Z, Shift+Z or Y anywhere on the page, but not where a field has an undo of its own. */
export function useUndoKeys(keeper: { undo: () => void; redo: () => void }) {
  useEffect(() => {
    const onKey = (event: KeyboardEvent) => {
      if (!(event.ctrlKey || event.metaKey) || event.altKey) return
      const at = event.target
      if (at instanceof HTMLElement && at.closest('input, textarea, select, dialog, .monaco-editor')) return
      const key = event.key.toLowerCase()
      if (key !== 'z' && key !== 'y') return
      event.preventDefault()
      if (key === 'y' || event.shiftKey) keeper.redo()
      else keeper.undo()
    }
    document.addEventListener('keydown', onKey)
    return () => document.removeEventListener('keydown', onKey)
  }, [keeper])
}
