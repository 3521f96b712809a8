import { diffLines } from 'diff'
import { useMemo, useState } from 'react'
import { count } from '../../../lib/format.ts'

/** Lines around what differs. */
const AROUND = 3

interface Line {
  kind: 'same' | 'gone' | 'new'
  text: string
  before: number | null
  after: number | null
}

interface Hunk {
  /** equal lines left out before it */
  skipped: Line[]
  lines: Line[]
}

/** Lines of two texts side by number, those that differ marked. */
export function linesBetween(before: string, after: string): Line[] {
  let [b, a] = [0, 0]
  return diffLines(before, after).flatMap((part): Line[] =>
    part.value
      .replace(/\n$/, '')
      .split('\n')
      .map((text) => ({ kind: part.added ? 'new' : part.removed ? 'gone' : 'same', text, before: part.added ? null : ++b, after: part.removed ? null : ++a })),
  )
}

/** Stretches that differ, each with a few equal lines around. */
export function hunksOf(lines: readonly Line[]): { hunks: Hunk[]; rest: Line[] } {
  const near = lines.map((_, i) => lines.slice(Math.max(0, i - AROUND), i + AROUND + 1).some((l) => l.kind !== 'same'))
  const hunks: Hunk[] = []
  let skipped: Line[] = []
  lines.forEach((line, i) => {
    if (!near[i]) {
      skipped.push(line)
      return
    }
    if (i === 0 || !near[i - 1]) {
      hunks.push({ skipped, lines: [] })
      skipped = []
    }
    hunks[hunks.length - 1].lines.push(line)
  })
  return { hunks, rest: skipped }
}

const SIGN = { same: ' ', gone: '\u2212', new: '+' } as const
const TONE = { same: '', gone: 'bg-oxide-wash', new: 'bg-verdigris-wash' } as const
const SAID = { same: '', gone: 'taken away: ', new: 'added: ' } as const

/** The change as text, line by line; equal stretches fold and open. */
export default function TextDiff({ before, after }: { before: string; after: string }) {
  const { hunks, rest } = useMemo(() => hunksOf(linesBetween(before, after)), [before, after])
  if (hunks.length === 0) return <p className="text-13 text-ink-2">The two texts are the same.</p>
  return (
    <div className="sheet mt-2 overflow-x-auto py-2">
      {hunks.map((h, i) => (
        <div key={i}>
          <Folded lines={h.skipped} />
          {h.lines.map((l, k) => (
            <TextLine key={k} line={l} />
          ))}
        </div>
      ))}
      <Folded lines={rest} />
    </div>
  )
}

function Folded({ lines }: { lines: readonly Line[] }) {
  const [open, setOpen] = useState(false)
  if (lines.length === 0) return null
  if (open) return lines.map((l, i) => <TextLine key={i} line={l} />)
  return (
    <button type="button" className="my-1 block w-full border-y border-hairline bg-paper px-3 py-[2px] text-left text-12 text-ink-2" onClick={() => setOpen(true)}>
      {count(lines.length, 'equal line')}
    </button>
  )
}

function TextLine({ line }: { line: Line }) {
  return (
    <div className={`num flex min-w-max text-12 leading-[18px] ${TONE[line.kind]}`}>
      <span aria-hidden="true" className="w-[5ch] flex-none pr-2 text-right text-ink-2">
        {line.before ?? ''}
      </span>
      <span aria-hidden="true" className="w-[5ch] flex-none pr-2 text-right text-ink-2">
        {line.after ?? ''}
      </span>
      <span aria-hidden="true" className="w-[2ch] flex-none">
        {SIGN[line.kind]}
      </span>
      <span className="whitespace-pre">
        <span className="sr-only">{SAID[line.kind]}</span>
        {line.text}
      </span>
    </div>
  )
}
