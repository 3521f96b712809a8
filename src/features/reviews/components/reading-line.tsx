import { useEffect } from 'react'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Key } from '../../../components/ui/key.tsx'
import type { Reading } from '../use-reading.ts'

/** The next box without a mark after the focus, around the end. */
function goToNext() {
  const boxes = [...document.querySelectorAll<HTMLInputElement>('input[data-read]')].filter((b) => b.checkVisibility?.() !== false)
  const here = boxes.indexOf(document.activeElement as HTMLInputElement)
  const next = [...boxes.slice(here + 1), ...boxes.slice(0, here + 1)].find((b) => !b.checked)
  next?.focus()
}

/** How far the reader is, who else has read, and the way to the next row: signing needs all of them read. */
export function ReadingLine({ reading }: { reading: Reading }) {
  const left = reading.rows - reading.read.size
  const may = reading.mark !== null
  useEffect(() => {
    if (!may) return
    const onKey = (event: KeyboardEvent) => {
      const at = event.target
      const typing = at instanceof HTMLElement && at.closest('input:not([type="checkbox"]), textarea, select, dialog, .monaco-editor') !== null
      if (event.key !== 'n' || typing || event.ctrlKey || event.metaKey || event.altKey) return
      event.preventDefault()
      goToNext()
    }
    document.addEventListener('keydown', onKey)
    return () => document.removeEventListener('keydown', onKey)
  }, [may])
  if (!may && reading.others.length === 0) return null
  return (
    <div className="mb-4">
      <div className="flex flex-wrap items-center gap-x-5 gap-y-1 text-13 text-ink-2">
        {may && (
          <span role="status">
            <span className={left > 0 ? 'font-medium text-brass' : 'text-verdigris'}>
              {reading.read.size} of {reading.rows} {reading.rows === 1 ? 'row' : 'rows'} read
            </span>
            {left > 0 && ', all before signing'}
          </span>
        )}
        {may && left > 0 && (
          <Button small kind="link" aria-keyshortcuts="n" onClick={goToNext}>
            next unread <Key>n</Key>
          </Button>
        )}
        {reading.others.map((p) => (
          <span key={p.name}>
            {p.name} has read {p.read === reading.rows ? 'all' : p.read}
          </span>
        ))}
      </div>
      <ProblemPanel className="mt-1" problem={reading.problem} />
    </div>
  )
}
