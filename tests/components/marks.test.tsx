// @vitest-environment jsdom
import './setup-dom.ts'
import { render, screen, within } from '@testing-library/react'
import type { ReactElement } from 'react'
import { describe, expect, it } from 'vitest'
import { BoardMark } from '../../src/components/ui/board-mark.tsx'
import { BOARD_COLOUR } from '../../src/components/ui/board-shape.tsx'
import type { BoardState } from '../../src/components/ui/board-shape.tsx'
import { Bytes } from '../../src/components/ui/bytes.tsx'
import { FindingMark } from '../../src/components/ui/finding-mark.tsx'
import { Num } from '../../src/components/ui/num.tsx'
import { OriginMark } from '../../src/components/ui/origin-mark.tsx'
import { Rail } from '../../src/components/ui/rail.tsx'
import { ReleaseMark } from '../../src/components/ui/release-mark.tsx'
import { SmallRail } from '../../src/components/ui/small-rail.tsx'
import { Time } from '../../src/components/ui/time.tsx'
import { VerdictMark } from '../../src/components/ui/verdict-mark.tsx'

const GROUPS: Record<string, [word: string, mark: ReactElement][]> = {
  verdicts: (['stable', 'on the boundary', 'unstable'] as const).map((v) => [v, <VerdictMark key={v} verdict={v} />]),
  findings: (['pass', 'advise', 'concession needed', 'block'] as const).map((l) => [l, <FindingMark key={l} level={l} />]),
  boards: (Object.keys(BOARD_COLOUR) as BoardState[]).map((s) => [s, <BoardMark key={s} state={s} />]),
  origins: (['firmware', 'family', 'joint'] as const).map((o) => [o, <OriginMark key={o} origin={o} />]),
  releases: (['current', 'superseded', 'withdrawn'] as const).map((s) => [s, <ReleaseMark key={s} state={s} />]),
  rails: (['draft', 'submitted', 'approved', 'released', 'returned', 'signature void', 'cancelled'] as const).map((s) => [s, <SmallRail key={s} state={s} />]),
}

/** The drawing without its colours. */
function shapeOf(mark: ReactElement): string {
  const { container, unmount } = render(mark)
  const shape = (container.querySelector('svg')?.innerHTML ?? '').replaceAll(/var\(--[a-z0-9-]+\)/g, 'X').replaceAll('currentColor', 'X')
  unmount()
  return shape
}

describe.each(Object.entries(GROUPS))('%s', (_name, marks) => {
  it.each(marks)('%s has its word', (word, mark) => {
    render(mark)
    expect(screen.getByText(word)).toBeTruthy()
  })
  it('tells each from the others by shape alone', () => {
    const shapes = marks.map(([, mark]) => shapeOf(mark))
    expect(shapes.every((s) => s.length > 0)).toBe(true)
    expect(new Set(shapes).size).toBe(marks.length)
  })
})

describe('the rail', () => {
  const draft = { who: 'Mirela Castanho', at: '2026-11-28T09:14:00Z' }
  const submitted = { who: 'Mirela Castanho', at: '2026-11-29T17:24:00Z' }

  it('lists the notches with who, and says which is reached and what is not yet', () => {
    render(<Rail at="submitted" marks={{ draft, submitted }} peerReview="signed" />)
    const steps = within(screen.getByRole('list', { name: 'life of the change' })).getAllByRole('listitem')
    expect(steps.map((s) => s.getAttribute('aria-current'))).toEqual([null, 'step', null, null])
    expect(steps[0].textContent).toContain('Mirela Castanho')
    expect(steps[3].textContent).toContain('not yet')
    expect(screen.getByText('peer review', { exact: false }).textContent).toBe('peer review signed')
  })

  it('words a return, a void signature and the end', () => {
    render(<Rail at="draft" marks={{ draft }} struck={{ place: 'submitted', word: 'returned', at: '2026-11-30T12:04:00Z' }} />)
    expect(screen.getByText('returned')).toBeTruthy()
    render(<Rail at="submitted" marks={{ draft, submitted }} peerReview="void" struck={{ place: 'approved', word: 'void' }} />)
    expect(screen.getAllByText('void').some((e) => e.closest('li')?.textContent?.startsWith('approved'))).toBe(true)
    render(<Rail at="submitted" marks={{ draft, submitted }} cancelled={submitted} />)
    expect(screen.getByText('cancelled')).toBeTruthy()
  })
})

describe('figures in words', () => {
  it('reads changed bytes out, not by colour', () => {
    const { container } = render(<Bytes bytes={[0x9a, 0x99]} before={[0x33, 0x99]} />)
    expect(container.querySelectorAll('b')).toHaveLength(1)
    expect(container.textContent).toBe('9A 99, 1 of 2 bytes changed')
  })
  it('reads a missing number as none, and keeps the digits of a decimal text', () => {
    render(<Num value={null} />)
    expect(screen.getByText('none')).toBeTruthy()
    const { container } = render(<Num value="3.20" unit="A" />)
    expect(container.textContent).toBe('3.20A')
  })
  it('has UTC on hover', () => {
    render(<Time at="2026-11-30T16:41:07Z" />)
    expect(document.querySelector('time')?.title).toBe('30 Nov 2026 16:41:07 UTC')
  })
})
