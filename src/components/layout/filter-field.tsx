import { useEffect, useRef } from 'react'
import { isTyping } from '../ui/is-typing.ts'
import { Key } from '../ui/key.tsx'

export interface FilterFieldProps {
  label: string
  value: string
  onChange: (text: string) => void
  /** Key that brings the focus here while nothing is typed elsewhere. */
  hotkey?: string
  className?: string
}

/** Narrows the rows below while it is typed in. */
export function FilterField({ label, value, onChange, hotkey = 'f', className = 'w-[200px]' }: FilterFieldProps) {
  const input = useRef<HTMLInputElement>(null)
  useEffect(() => {
    const onKey = (event: KeyboardEvent) => {
      if (event.key !== hotkey || event.ctrlKey || event.metaKey || event.altKey || isTyping(event.target)) return
      event.preventDefault()
      input.current?.focus()
      input.current?.select()
    }
    document.addEventListener('keydown', onKey)
    return () => document.removeEventListener('keydown', onKey)
  }, [hotkey])
  return (
    <div className={`find h-[28px] ${className}`}>
      <input
        ref={input}
        type="search"
        aria-label={label}
        aria-keyshortcuts={hotkey}
        placeholder="filter"
        autoComplete="off"
        spellCheck={false}
        value={value}
        onChange={(e) => onChange(e.target.value)}
        onKeyDown={(event) => {
          if (event.key !== 'Escape') return
          onChange('')
          input.current?.blur()
        }}
      />
      <span aria-hidden="true">
        <Key>{hotkey}</Key>
      </span>
    </div>
  )
}
