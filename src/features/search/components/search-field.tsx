import { lazy, Suspense, useEffect, useId, useRef, useState } from 'react'
import type { KeyboardEvent } from 'react'
import { useNavigate } from 'react-router'
import { paths } from '../../../app/paths.ts'
import { Key } from '../../../components/ui/key.tsx'
import { isTyping } from '../../../components/ui/is-typing.ts'
import { pathOf } from '../find-path.ts'
import { useFinds } from '../use-finds.ts'

const FindList = lazy(() => import('./find-list.tsx').then((m) => ({ default: m.FindList })))

/**
 * The search of the top bar (WAI-ARIA APG, combobox with a listbox): `/` brings the focus here from anywhere on the page, arrows walk the
 * finds, Enter opens the one walked to, or the page of all finds, Esc closes the list and then leaves the field.
 */
export function SearchField({ className = '' }: { className?: string }) {
  const [text, setText] = useState('')
  const [open, setOpen] = useState(false)
  const [at, setAt] = useState(-1)
  const root = useRef<HTMLFormElement>(null)
  const input = useRef<HTMLInputElement>(null)
  const id = useId()
  const navigate = useNavigate()
  const finds = useFinds(open ? text : '')
  const shown = open && finds !== null
  const active = shown && at < finds.flat.length ? at : -1

  useEffect(() => {
    const onKey = (event: globalThis.KeyboardEvent) => {
      if (event.key !== '/' || event.ctrlKey || event.metaKey || event.altKey || isTyping(event.target)) return
      // Two fields are in the page, one for each width; only the one that is laid out answers.
      if (!input.current || input.current.checkVisibility?.() === false) return
      event.preventDefault()
      input.current.focus()
      input.current.select()
    }
    document.addEventListener('keydown', onKey)
    return () => document.removeEventListener('keydown', onKey)
  }, [])

  const close = () => {
    setOpen(false)
    setAt(-1)
  }
  const go = (to: string) => {
    close()
    input.current?.blur()
    void navigate(to)
  }
  const onKeyDown = (event: KeyboardEvent) => {
    const n = finds?.flat.length ?? 0
    if (event.key === 'Escape') {
      if (shown) close()
      else input.current?.blur()
    } else if (event.key === 'ArrowDown' && n > 0) {
      setOpen(true)
      setAt((active + 1) % n)
    } else if (event.key === 'ArrowUp' && n > 0) setAt(active <= 0 ? n - 1 : active - 1)
    else return
    event.preventDefault()
  }

  return (
    <form
      ref={root}
      role="search"
      className={`relative ${className}`}
      onBlur={(event) => {
        if (!root.current?.contains(event.relatedTarget)) close()
      }}
      onSubmit={(event) => {
        event.preventDefault()
        if (active >= 0) go(pathOf(finds!.flat[active].at))
        else if (text.trim()) go(paths.search(text.trim()))
      }}
    >
      <div className="find">
        <input
          ref={input}
          type="search"
          role="combobox"
          aria-label="search"
          aria-keyshortcuts="/"
          aria-autocomplete="list"
          aria-expanded={shown && finds.flat.length > 0}
          aria-controls={`${id}-finds`}
          aria-activedescendant={active >= 0 ? `${id}-${active}` : undefined}
          placeholder="joint, board, hash, value"
          autoComplete="off"
          spellCheck={false}
          maxLength={100}
          value={text}
          onChange={(event) => {
            setText(event.target.value)
            setOpen(true)
            setAt(-1)
          }}
          onFocus={() => setOpen(true)}
          onKeyDown={onKeyDown}
        />
        <span aria-hidden="true">
          <Key>/</Key>
        </span>
      </div>
      <span role="status" className="sr-only">
        {shown ? finds.told : ''}
      </span>
      {shown && (
        <Suspense fallback={null}>
          <FindList id={id} finds={finds} active={active} onPick={(find) => go(pathOf(find.at))} />
        </Suspense>
      )}
    </form>
  )
}
