import { useEffect, useRef, useState } from 'react'
import { Key } from './key.tsx'

export interface SearchBoxProps {
  onSearch: (text: string) => void
  initial?: string
  placeholder?: string
  className?: string
  /** The key that brings the focus here from anywhere on the page. */
  hotkey?: string
  label?: string
}

/** A search field the page can be sent to with one key, unless the reader is typing somewhere. */
export function SearchBox({ onSearch, initial = '', placeholder = 'joint, board, hash, value', className = '', hotkey = '/', label = 'search' }: SearchBoxProps) {
  const [text, setText] = useState(initial)
  const input = useRef<HTMLInputElement>(null)

  useEffect(() => {
    const onKey = (event: KeyboardEvent) => {
      if (event.key !== hotkey || event.ctrlKey || event.metaKey || event.altKey || isTyping(event.target)) return
      // Two boxes may be in the page, one for each width; only the one that is laid out answers.
      if (!input.current || input.current.checkVisibility?.() === false) return
      event.preventDefault()
      input.current.focus()
      input.current.select()
    }
    document.addEventListener('keydown', onKey)
    return () => document.removeEventListener('keydown', onKey)
  }, [hotkey])

  return (
    <form
      role="search"
      className={`find ${className}`}
      onSubmit={(event) => {
        event.preventDefault()
        onSearch(text.trim())
      }}
    >
      <input
        ref={input}
        type="search"
        aria-label={label}
        aria-keyshortcuts={hotkey}
        placeholder={placeholder}
        autoComplete="off"
        spellCheck={false}
        value={text}
        onChange={(e) => setText(e.target.value)}
        onKeyDown={(event) => {
          if (event.key === 'Escape') input.current?.blur()
        }}
      />
      <span aria-hidden="true">
        <Key>{hotkey}</Key>
      </span>
    </form>
  )
}

function isTyping(target: EventTarget | null): boolean {
  return target instanceof HTMLElement && (target.isContentEditable || ['INPUT', 'TEXTAREA', 'SELECT'].includes(target.tagName) || target.closest('.monaco-editor, dialog') !== null)
}
