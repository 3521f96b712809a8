import { useQuery, useQueryClient, useSuspenseQuery, type UseQueryResult } from '@tanstack/react-query'
import { lazy, Suspense, useState } from 'react'
import { useNavigate, useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import type { ChangeView } from '../../shared/contract/changes.ts'
import type { CheckView } from '../../shared/contract/checks.ts'
import type { DiffView } from '../../shared/contract/reviews.ts'
import { Region } from '../components/layout/region.tsx'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { ChangeHead } from '../features/changes/components/change-head.tsx'
import { LetterSymbol } from '../features/changes/components/letter-symbol.tsx'
import { lineOfLetter } from '../features/changes/drive-train-letters.ts'
import { acceptChange, changeQuery } from '../features/changes/queries.ts'
import { AllTogether } from '../features/checks/components/all-together.tsx'
import { FindingList } from '../features/checks/components/finding-list.tsx'
import { ToleranceWalk } from '../features/checks/components/tolerance-walk.tsx'
import { countsText } from '../features/checks/figures.ts'
import { checkQuery } from '../features/checks/queries.ts'
import { ConcessionCard } from '../features/reviews/components/concession-card.tsx'
import { DiffTable } from '../features/reviews/components/diff-table.tsx'
import { History } from '../features/reviews/components/history.tsx'
import { OtherChanges } from '../features/reviews/components/other-changes.tsx'
import { Signing } from '../features/reviews/components/signing.tsx'
import { diffQuery, effectsQuery } from '../features/reviews/queries.ts'
import { ReadAll } from '../features/reviews/components/read-box.tsx'
import { ReadingLine } from '../features/reviews/components/reading-line.tsx'
import { useReading, type Reading } from '../features/reviews/use-reading.ts'
import { useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

const TextDiff = lazy(() => import('../features/reviews/components/text-diff.tsx'))

export async function loader({ params }: LoaderFunctionArgs) {
  const change = await queryClient.fetchQuery({ ...changeQuery(params.change!), staleTime: 2000 })
  void queryClient.prefetchQuery(diffQuery(change.key, change.revision))
  void queryClient.prefetchQuery(checkQuery(change.key, change.revision))
  return null
}

export function Component() {
  const { change: key } = useParams()
  const change = useSuspenseQuery(changeQuery(key!)).data
  const client = useQueryClient()
  const navigate = useNavigate()
  const check = useQuery(checkQuery(change.key, change.revision))
  const diff = useQuery(diffQuery(change.key, change.revision))
  const granted = change.state === 'released'
  const reading = useReading(change, useMe().name)
  return (
    <>
      <ChangeHead change={change} />
      <div className="mt-4 grid grid-cols-[minmax(0,1fr)] gap-x-6 gap-y-8 xl:grid-cols-[minmax(0,1fr)_340px]">
        <div className="min-w-0">
          <Reason change={change} />
          {reading && <ReadingLine reading={reading} />}
          <Differences change={change} diff={diff} check={check.data} reading={reading} />
          <section className="mt-8">
            <SectionHeading aux={check.data && countsText(check.data)} actions={<TextLink to={paths.changeCheck(change.key)}>full report</TextLink>}>
              Findings
            </SectionHeading>
            <div className="mt-1">
              <Region query={check} what="the check">
                {(c) => <><ToleranceWalk change={change.key} check={c} className="my-2 max-w-[640px]" /><FindingList findings={c.findings} nameOf={nameIn(change)} note={(f) => (change.concessions.some((r) => r.finding === f.key) ? <p className="text-plum">concession {change.concessions.findIndex((r) => r.finding === f.key) + 1}</p> : null)} /></>}
              </Region>
            </div>
          </section>
        </div>
        <aside className="grid content-start gap-6">
          <Signing
            change={change}
            diff={diff.data}
            reading={reading}
            verdict={check.data?.verdict ?? null}
            counts={check.data?.counts ?? null}
            onChange={(view) => acceptChange(client, view)}
            onReleased={async ({ machine, version }) => {
              await client.invalidateQueries()
              await navigate(paths.release(machine, version))
            }}
          />
          {change.concessions.map((c, i) => (
            <ConcessionCard key={c.finding} concession={c} number={i + 1} finding={check.data?.findings.find((f) => f.key === c.finding) ?? null} granted={granted} />
          ))}
          <History events={change.events} />
        </aside>
      </div>
    </>
  )
}

const nameIn = (change: ChangeView) => (joint: string) => change.set.joints[joint]?.name ?? change.base.joints[joint]?.name ?? joint

function Reason({ change }: { change: ChangeView }) {
  if (change.reason.trim() === '') return <p className="mb-4 text-ink-2">No reason is written yet.</p>
  return <p className="mb-4 max-w-[76ch] whitespace-pre-wrap">{change.reason}</p>
}

function Differences({ change, diff, check, reading }: { change: ChangeView; diff: UseQueryResult<DiffView>; check: CheckView | undefined; reading: Reading | null }) {
  const effects = useQuery(effectsQuery(change.key, change.revision)).data
  const byRow = new Map(effects?.effects.map((e) => [e.row, e]))
  const [text, setText] = useState(false)
  const nameOf = nameIn(change)
  const family = (key: string) => change.set.families[key]?.name ?? change.base.families[key]?.name ?? key
  return (
    <Region
      query={diff}
      what="what alters"
      lines={8}
      isEmpty={(d) => d.counts.rows === 0}
      empty={<EmptyState title="Nothing alters yet">Values, drive trains, addresses and firmware versions are as {change.baseVersion ? `released in ${change.baseVersion}` : 'in an empty machine'}.</EmptyState>}
    >
      {(d) => (
        <>
          {d.groups.map((g) => (
            <section key={`${g.family} ${g.joints.join()}`} className="mb-6" aria-label={`${family(g.family)} family`}>
              <SectionHeading aux={g.joints.map(nameOf).join(', ')} actions={<ReadAll rows={[...g.rows, ...g.own.flatMap((o) => o.rows)]} what={`${family(g.family)} family`} reading={reading} />}>
                {family(g.family)} family
              </SectionHeading>
              <DiffTable group={g} nameOf={nameOf} baseVersion={change.baseVersion} label={`what alters in the ${family(g.family)} family`} reading={reading} effects={byRow} />
              {check && <AllTogether check={check} joints={g.joints} nameOf={nameOf} />}
            </section>
          ))}
          <OtherChanges
            diff={d}
            reading={reading}
            nameOf={{ joint: nameOf, family, bus: (key) => change.set.buses[key]?.name ?? change.base.buses[key]?.name ?? key }}
            letterOf={(letter) => {
              const line = lineOfLetter(letter)
              return line ? { symbol: <LetterSymbol line={line} />, words: line.words, unit: line.unit ?? '' } : { symbol: letter, words: '', unit: '' }
            }}
          />
          <div className="mt-4">
            <Button small aria-expanded={text} onClick={() => setText(!text)}>
              {text ? 'Hide the text' : 'Compare as text'}
            </Button>
            {text && (
              <Suspense fallback={<Waiting className="mt-2" what="the text" />}>
                <TextDiff before={d.textBefore} after={d.textAfter} />
              </Suspense>
            )}
          </div>
        </>
      )}
    </Region>
  )
}
