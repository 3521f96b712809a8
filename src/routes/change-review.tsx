import { useQuery, useQueryClient, useSuspenseQuery } from '@tanstack/react-query'
import { useMemo, useRef, useState } from 'react'
import { useNavigate, useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import type { ChangeView } from '../../shared/contract/changes.ts'
import type { CommentPlace } from '../../shared/contract/comments.ts'
import type { Me } from '../../shared/contract/people.ts'
import type { DiffView } from '../../shared/contract/reviews.ts'
import { Region } from '../components/layout/region.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { ChangeHead } from '../features/changes/components/change-head.tsx'
import { LetterSymbol } from '../features/changes/components/letter-symbol.tsx'
import { lineOfLetter } from '../features/changes/drive-train-letters.ts'
import { placeWords, wholeWords } from '../features/changes/place-words.ts'
import { acceptChange, changeQuery, draftPointsQuery, firmwareNames, schemasQuery } from '../features/changes/queries.ts'
import { AllTogether } from '../features/checks/components/all-together.tsx'
import { FindingList } from '../features/checks/components/finding-list.tsx'
import { ToleranceWalk } from '../features/checks/components/tolerance-walk.tsx'
import { countsText } from '../features/checks/figures.ts'
import { checkQuery } from '../features/checks/queries.ts'
import { CommentList } from '../features/comments/components/comment-list.tsx'
import { CommentMark } from '../features/comments/components/comment-mark.tsx'
import { commentsQuery } from '../features/comments/queries.ts'
import { useHashTarget } from '../features/comments/use-hash-target.ts'
import { ChangeEvidence } from '../features/evidence/components/change-evidence.tsx'
import { changeEvidenceQuery } from '../features/evidence/queries.ts'
import { peopleQuery } from '../features/people/queries.ts'
import { ConcessionCard } from '../features/reviews/components/concession-card.tsx'
import { Differences } from '../features/reviews/components/differences.tsx'
import { History } from '../features/reviews/components/history.tsx'
import { PresenceLine } from '../features/reviews/components/presence-line.tsx'
import { Signing } from '../features/reviews/components/signing.tsx'
import { goToRowOf } from '../features/reviews/go-to-row.ts'
import { diffQuery, effectsQuery, readingQuery } from '../features/reviews/queries.ts'
import { useChangeEvents } from '../features/reviews/use-change-events.ts'
import { useReading } from '../features/reviews/use-reading.ts'
import { holds, useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

export async function loader({ params }: LoaderFunctionArgs) {
  const change = await queryClient.fetchQuery({ ...changeQuery(params.change!), staleTime: 2000 })
  void queryClient.prefetchQuery(diffQuery(change.key, change.revision))
  void queryClient.prefetchQuery(readingQuery(change.key, change.revision))
  void queryClient.prefetchQuery(commentsQuery(change.key))
  void queryClient.prefetchQuery(changeEvidenceQuery(change.key, change.revision))
  void queryClient.prefetchQuery(checkQuery(change.key, change.revision))
  return null
}

/** A place that comments hang on, and what it is called. */
interface Place {
  place: CommentPlace
  title: string
}
const whole: Place = { place: { kind: 'change' }, title: 'the change' }

export function Component() {
  const { change: key } = useParams()
  const change = useSuspenseQuery(changeQuery(key!)).data
  const client = useQueryClient()
  const navigate = useNavigate()
  const me = useMe()
  const check = useQuery(checkQuery(change.key, change.revision))
  const diff = useQuery(diffQuery(change.key, change.revision))
  const effects = useQuery({ ...effectsQuery(change.key, change.revision), enabled: change.baseVersion !== null })
  const comments = useQuery(commentsQuery(change.key))
  const reading = useReading(change, diff.data)
  const [on, setOn] = useState<Place>(whole)
  const field = useRef<HTMLTextAreaElement>(null)
  const people = useReaders(change.machine)
  const refresh = () => void client.invalidateQueries({ queryKey: changeQuery(change.key).queryKey })
  const present = useChangeEvents(change.key, 'review', {
    onNews: (news) => {
      if (news.kind === 'comment') void client.invalidateQueries({ queryKey: commentsQuery(change.key).queryKey })
      else if (news.revision > change.revision) refresh()
    },
    onMissed: () => {
      refresh()
      void client.invalidateQueries({ queryKey: commentsQuery(change.key).queryKey })
    },
  })
  useHashTarget(comments.data !== undefined)

  const written = comments.data?.comments ?? []
  const mayWrite = comments.data?.may.write.allowed ?? false
  const open = (place: Place) => {
    setOn(place)
    if (field.current) {
      field.current.focus({ preventScroll: true })
      field.current.scrollIntoView?.({ block: 'center' })
    } else document.getElementById('comments')?.scrollIntoView()
  }
  /** Back to the row that the comment was hung on, so that reading goes on from there. */
  const goOn = () => {
    wayTo(on.place, reading.rows)?.()
    setOn(whole)
  }
  const mark = ({ place, title }: Place) => <CommentMark comments={written} place={place} title={title} mayWrite={mayWrite} onOpen={() => open({ place, title })} />
  const nameOf = namesIn(change)
  return (
    <>
      <ChangeHead change={change} actions={<PresenceLine present={present} className="ml-auto" />} />
      <div className="mt-4 grid grid-cols-[minmax(0,1fr)] gap-x-6 gap-y-8 xl:grid-cols-[minmax(0,1fr)_340px]">
        <div className="min-w-0">
          <Reason change={change} />
          <Differences
            query={diff}
            effects={change.baseVersion === null ? null : (effects.data ?? { effects: [], progress: { done: 0, total: 1, state: 'running', problem: '' } })}
            reading={reading}
            baseVersion={change.baseVersion}
            me={me.name}
            nameOf={nameOf}
            letterOf={letterOf}
            aside={({ pointer, title }) => mark({ place: { kind: 'value', pointer }, title })}
            onOpen={({ pointer, title }) => open({ place: { kind: 'value', pointer }, title })}
            together={(g) => check.data && <AllTogether check={check.data} joints={g.joints} nameOf={nameOf.joint} />}
          />
          <section className="mt-8">
            <SectionHeading aux={check.data && countsText(check.data)} actions={<TextLink to={paths.changeCheck(change.key)}>full report</TextLink>}>
              Findings
            </SectionHeading>
            <div className="mt-1">
              <Region query={check} what="the check">
                {(c) => (
                  <>
                    <ToleranceWalk change={change.key} check={c} className="no-print my-2 max-w-[640px]" />
                    <FindingList
                      findings={c.findings}
                      nameOf={nameOf.joint}
                      note={(f) => (
                        <span className="flex items-center gap-2 md:justify-end">
                          {change.concessions.some((r) => r.finding === f.key) && <span className="text-plum">concession {change.concessions.findIndex((r) => r.finding === f.key) + 1}</span>}
                          {mark({ place: { kind: 'finding', finding: f.key }, title: f.loop ? `${f.loop} ${f.kind}` : f.kind })}
                        </span>
                      )}
                    />
                  </>
                )}
              </Region>
            </div>
          </section>
          <ChangeEvidence machine={change.machine} change={change.key} revision={change.revision} joints={jointsOf(change, diff.data)} adding={addingTo(change, me)} onSent={(number) => void navigate(paths.evidence(change.machine, number))} />
        </div>
        <aside className="grid content-start gap-6">
          <Signing
            change={change}
            diff={diff.data}
            verdict={check.data?.verdict ?? null}
            counts={check.data?.counts ?? null}
            reading={reading}
            openComments={comments.data?.open ?? null}
            signer={me.name}
            onChange={(view) => acceptChange(client, view)}
            onReleased={async ({ machine, version }) => {
              await client.invalidateQueries()
              await navigate(paths.release(machine, version))
            }}
          />
          {change.concessions.map((c, i) => (
            <ConcessionCard key={c.finding} concession={c} number={i + 1} finding={check.data?.findings.find((f) => f.key === c.finding) ?? null} granted={change.state === 'released'} />
          ))}
          <CommentList change={change.key} query={comments} people={people} on={on} onWhole={() => setOn(whole)} onWritten={goOn} fieldRef={field} placeOf={(place) => wayTo(place, reading.rows)} />
          <Past change={change} />
        </aside>
      </div>
    </>
  )
}

/** Joints that a log can be of: those that alter first. */
function jointsOf(change: ChangeView, diff: DiffView | undefined) {
  const touched = new Set(diff?.groups.flatMap((g) => g.joints) ?? [])
  const all = Object.entries(change.set.joints).map(([key, { name }]) => ({ key, name }))
  return [...all.filter((j) => touched.has(j.key)), ...all.filter((j) => !touched.has(j.key))]
}

/** Its writers add evidence until the first signature. */
function addingTo(change: ChangeView, me: Me): { hold: string | null } | null {
  if (!change.writers.includes(me.name) || !holds(me, 'upload evidence', change.machine)) return null
  if (change.state !== 'draft' && change.state !== 'submitted') return null
  return { hold: change.signatures.some((s) => !s.void) ? 'The change is signed; its evidence is part of what was signed.' : null }
}

const namesIn = (change: ChangeView) => ({
  joint: (key: string) => change.set.joints[key]?.name ?? change.base.joints[key]?.name ?? key,
  family: (key: string) => change.set.families[key]?.name ?? change.base.families[key]?.name ?? key,
  bus: (key: string) => change.set.buses[key]?.name ?? change.base.buses[key]?.name ?? key,
})

function letterOf(letter: string) {
  const line = lineOfLetter(letter)
  return line ? { symbol: <LetterSymbol line={line} />, words: line.words, unit: line.unit ?? '' } : { symbol: letter, words: '', unit: '' }
}

/** People who may read the machine, and so may be named. */
function useReaders(machine: string) {
  const people = useQuery(peopleQuery).data?.people
  return useMemo(() => (people ?? []).filter((p) => p.state === 'active' && p.roles.some((r) => r.machine === null || r.machine === machine)), [people, machine])
}

/** Leads to the row that a comment hangs on, where it stands on the page. */
function wayTo(place: CommentPlace, rows: readonly { key: string; pointer: string }[]): (() => void) | null {
  if (place.kind !== 'value') return null
  const row = rows.find((r) => r.pointer === place.pointer)
  if (!row) return null
  return () => goToRowOf(row.key)
}

function Reason({ change }: { change: ChangeView }) {
  if (change.reason.trim() === '') return <p className="mb-4 text-ink-2">No reason is written yet.</p>
  return <p className="mb-4 max-w-[76ch] whitespace-pre-wrap">{change.reason}</p>
}

/** The life of the change, its draft points included. */
function Past({ change }: { change: ChangeView }) {
  const points = useQuery(draftPointsQuery(change.key, change.revision)).data ?? []
  const schemas = useQuery(schemasQuery(change.key, firmwareNames(change.set, change.base))).data ?? {}
  return (
    <History
      events={change.events}
      signatures={change.signatures}
      points={points}
      editWords={(edit) => wholeWords(edit) ?? placeWords(edit.pointer, [change.set, change.base], schemas)}
      actions={
        <button type="button" className="link no-print" onClick={() => window.print()}>
          print
        </button>
      }
    />
  )
}
