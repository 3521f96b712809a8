import type { UseQueryResult } from '@tanstack/react-query'
import { lazy, Suspense, useMemo, useRef, useState, type ReactNode } from 'react'
import type { DiffGroup, DiffView, EffectsView } from '../../../../shared/contract/reviews.ts'
import { Region } from '../../../components/layout/region.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { EmptyState } from '../../../components/ui/empty-state.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Waiting } from '../../../components/ui/waiting.tsx'
import { goToRowOf } from '../go-to-row.ts'
import type { NamedRow, RowTools } from '../row-tools.ts'
import { titleOf } from '../title-of.ts'
import type { Reading } from '../use-reading.ts'
import { useRowKeys } from '../use-row-keys.ts'
import { DiffTable } from './diff-table.tsx'
import { GroupRead } from './group-read.tsx'
import { OtherChanges, type OtherChangesProps } from './other-changes.tsx'
import { ReadingLine } from './reading-line.tsx'

const TextDiff = lazy(() => import('./text-diff.tsx'))

export interface DifferencesProps {
  query: UseQueryResult<DiffView>
  /** null where nothing is released to compare with */
  effects: EffectsView | null
  reading: Reading
  baseVersion: string | null
  /** the reader's printed name */
  me: string
  nameOf: OtherChangesProps['nameOf']
  letterOf: OtherChangesProps['letterOf']
  /** at the end of a row: its comments */
  aside: (row: NamedRow) => ReactNode
  /** opens the comments of a row */
  onOpen: (row: NamedRow) => void
  /** under a group: what its values do all together */
  together: (group: DiffGroup) => ReactNode
}

/** Everything that a change alters, to be gone through row by row. */
export function Differences({ query, effects, reading, baseVersion, me, nameOf, letterOf, aside, onOpen, together }: DifferencesProps) {
  const place = useRef<HTMLDivElement>(null)
  const [text, setText] = useState(false)
  const [at, setAt] = useState<string | null>(null)
  const byRow = useMemo(() => effects && new Map(effects.effects.map((e) => [e.row, e])), [effects])
  const rowOf = (key: string) => reading.rows.find((r) => r.key === key)
  const first = reading.unread[0]?.key ?? reading.rows[0]?.key ?? null
  const tools: RowTools = {
    read: reading.read,
    onRead: (row, read) => (read ? reading.mark([row]) : reading.unmark(row.key)),
    effects: byRow,
    aside,
    tabKey: at !== null && rowOf(at) ? at : first,
    onFocus: setAt,
  }
  useRowKeys(place, {
    isRead: (key) => reading.read?.has(key) ?? false,
    onRead: reading.read && ((key) => reading.mark([rowOf(key)!])),
    onOpen: (key) => query.data && onOpen({ ...rowOf(key)!, title: titleOf(query.data, key, nameOf) }),
  })
  return (
    <Region
      query={query}
      what="what alters"
      lines={8}
      isEmpty={(d) => d.counts.rows === 0}
      empty={<EmptyState title="Nothing alters yet">Values, drive trains, addresses and firmware versions are as {baseVersion ? `released in ${baseVersion}` : 'in an empty machine'}.</EmptyState>}
    >
      {(d) => (
        <div ref={place}>
          {reading.view && <ReadingLine view={reading.view} unread={reading.unread.length} kept={reading.kept} me={me} onNext={() => reading.unread[0] && goToRowOf(reading.unread[0].key, place.current ?? document)} />}
          <ProblemPanel className="mb-3" problem={reading.problem} />
          {d.groups.map((g) => {
            const family = `${nameOf.family(g.family)} family`
            const joints = g.joints.map(nameOf.joint).join(', ')
            // A family whose joints alter each in their own way has a part for each of them.
            const [title, aux] = d.groups.filter((o) => o.family === g.family).length === 1 ? [family, joints] : [joints, family]
            return (
              <section key={`${g.family} ${g.joints.join()}`} className="mb-6" aria-label={title}>
                <SectionHeading aux={aux} actions={<GroupRead rows={[...g.rows, ...g.own.flatMap((o) => o.rows)]} tools={tools} onReadAll={reading.mark} what={title} />}>
                  {title}
                </SectionHeading>
                <DiffTable group={g} nameOf={nameOf.joint} baseVersion={baseVersion} title={title} tools={tools} />
                {together(g)}
              </section>
            )
          })}
          <OtherChanges diff={d} nameOf={nameOf} letterOf={letterOf} tools={tools} onReadAll={reading.mark} />
          <div className="no-print mt-4">
            <Button small aria-expanded={text} onClick={() => setText(!text)}>
              {text ? 'Hide the text' : 'Compare as text'}
            </Button>
            {text && (
              <Suspense fallback={<Waiting className="mt-2" what="the text" />}>
                <TextDiff before={d.textBefore} after={d.textAfter} />
              </Suspense>
            )}
          </div>
        </div>
      )}
    </Region>
  )
}
