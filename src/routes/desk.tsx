import { useInfiniteQuery, useQuery } from '@tanstack/react-query'
import { paths } from '../app/paths.ts'
import type { ChangeSummary } from '../../shared/contract/changes.ts'
import { subjectWords } from '../components/layout/acts.tsx'
import { Region } from '../components/layout/region.tsx'
import { PageHead } from '../components/layout/page-head.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { Hash } from '../components/ui/hash.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { SmallRail } from '../components/ui/small-rail.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { Time } from '../components/ui/time.tsx'
import { AtTheBench } from '../features/boards/components/at-the-bench.tsx'
import { benchTasksQuery } from '../features/boards/queries.ts'
import { ChangeTable } from '../features/changes/components/change-table.tsx'
import { WaitingChange } from '../features/changes/components/waiting-change.tsx'
import { changesQuery } from '../features/changes/queries.ts'
import { waitingFor } from '../features/changes/waiting-for.ts'
import { CheckBrief } from '../features/checks/components/check-brief.tsx'
import { NamedSection } from '../features/comments/components/named-section.tsx'
import { namingQuery } from '../features/comments/queries.ts'
import { OtherTasks } from '../features/desk/components/other-tasks.tsx'
import { deskQuery } from '../features/desk/queries.ts'
import { ledgerQuery } from '../features/ledger/queries.ts'
import { count } from '../lib/format.ts'
import { holds, useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => {
  void queryClient.prefetchQuery(changesQuery())
  void queryClient.prefetchQuery(namingQuery)
  void queryClient.prefetchQuery(benchTasksQuery)
  void queryClient.prefetchQuery(deskQuery)
  return null
}

export function Component() {
  const me = useMe()
  const changes = useQuery({ ...changesQuery(), refetchOnWindowFocus: true })
  const tasks = useQuery({ ...benchTasksQuery, refetchOnWindowFocus: true }).data ?? []
  const desk = useQuery({ ...deskQuery, refetchOnWindowFocus: true }).data ?? { tasks: [], signed: [] }
  const naming = useQuery({ ...namingQuery, refetchOnWindowFocus: true }).data ?? []
  // How long things wait is read off when they were fetched: the page does not tick.
  const now = changes.dataUpdatedAt
  const first = me.name.split(' ')[0]
  const waiting = waitingFor((changes.data ?? []).filter((c) => !desk.signed.includes(c.key)), me.name, (act, machine) => holds(me, act, machine))
  const parts = [
    waiting.toSign.length > 0 && `${waiting.toSign.length} to read and sign`,
    waiting.toRelease.length > 0 && `${waiting.toRelease.length} to release`,
    waiting.returned.length > 0 && `${waiting.returned.length} returned to you`,
    naming.length > 0 && `${naming.length} naming you`,
    tasks.length > 0 && `${tasks.length} at the bench`,
    desk.tasks.length > 0 && `${desk.tasks.length} besides`,
  ].filter(Boolean)
  const toRead = waiting.toSign.length + waiting.toRelease.length + waiting.returned.length
  const total = toRead + naming.length + tasks.length + desk.tasks.length
  const open = (changes.data ?? []).filter((c) => c.state !== 'released' && c.state !== 'cancelled')
  return (
    <>
      <PageHead
        title={!changes.data ? first : total === 0 ? `${first}, nothing waits for you` : `${first}, ${inWords(total)} ${total === 1 ? 'thing waits' : 'things wait'} for you`}
        documentTitle="Desk"
        actions={<p className="text-right text-13 text-ink-2 max-sm:text-left">{rolesByMachine(me.roles)}</p>}
      >
        {parts.join(', ')}
        {parts.length > 0 && '. '}
        {changes.data && <Time at={now} style="date" />}
      </PageHead>
      <Region query={changes} what="what waits for you" lines={6} isEmpty={(all) => all.length === 0} empty={<EmptyState title="No change yet" action={<LinkButton to={paths.machines()}>To the machines</LinkButton>}>The first change gives a machine its buses, families and joints.</EmptyState>}>
        {() => (
          <>
            <div className="grid grid-cols-[minmax(0,1fr)] gap-x-12 gap-y-8 xl:grid-cols-[minmax(0,1fr)_400px]">
              <div className="min-w-0">
                <NamedSection naming={naming} />
                <Group title="To read and sign" changes={waiting.toSign} act="Read and sign" now={now} />
                <Group title="To release" changes={waiting.toRelease} act="Read and release" now={now} />
                <Group title="Returned to you" changes={waiting.returned} act="Take it up again" now={now} toDraft />
                <OtherTasks tasks={desk.tasks} now={now} />
                <Group title="Your drafts" changes={waiting.drafts} act="Go on" now={now} toDraft />
                {toRead + waiting.drafts.length + desk.tasks.length === 0 && <EmptyState title={tasks.length > 0 ? 'No change waits for you' : 'Nothing waits for you'}>Changes land here when they are submitted for your review, approved for your release, or returned to you.</EmptyState>}
                {waiting.away.length > 0 && <Away changes={waiting.away} />}
              </div>
              <div className="min-w-0">
                <AtTheBench tasks={tasks} />
                <LastActs />
              </div>
            </div>
            <section className="mt-8">
              <SectionHeading aux={`${open.length} of ${count(changes.data?.length ?? 0, 'change')}`} actions={<TextLink to={paths.changes()}>all changes</TextLink>}>
                Not yet released
              </SectionHeading>
              <div className="mt-1">
                <ChangeTable label="changes not yet released" changes={open} empty="Every change is released or cancelled." />
              </div>
            </section>
          </>
        )}
      </Region>
    </>
  )
}

function Group({ title, changes, act, now, toDraft = false }: { title: string; changes: readonly ChangeSummary[]; act: string; now: number; toDraft?: boolean }) {
  if (changes.length === 0) return null
  return (
    <section className="mb-6">
      <SectionHeading aux={changes.length > 1 ? 'longest waiting first' : undefined}>{title}</SectionHeading>
      <ul>
        {changes.map((c) => (
          <WaitingChange key={c.key} change={c} to={toDraft ? paths.change(c.key) : paths.changeReview(c.key)} act={act} now={now}>
            {!toDraft && <CheckBrief change={c.key} />}
          </WaitingChange>
        ))}
      </ul>
    </section>
  )
}

/** Own changes that others read now. */
function Away({ changes }: { changes: readonly ChangeSummary[] }) {
  return (
    <section className="mb-6">
      <SectionHeading aux="with others">Yours, on their way</SectionHeading>
      <ul>
        {changes.map((c) => (
          <li key={c.key} className="flex flex-wrap items-center gap-x-4 border-b border-hairline py-2">
            <span className="num w-[3ch] text-ink-2">{c.number}</span>
            <TextLink to={paths.changeReview(c.key)} className="!border-0 !text-ink">
              {c.title}
            </TextLink>
            <span className="text-13 text-ink-2">{c.machineName}</span>
            <span className="ml-auto">
              <SmallRail state={c.life} />
            </span>
          </li>
        ))}
      </ul>
    </section>
  )
}

/** The last acts of the workplace, as the ledger has them. */
function LastActs() {
  const ledger = useInfiniteQuery(ledgerQuery({ act: '', machine: '', person: '' }))
  return (
    <section aria-label="last acts">
      <SectionHeading actions={<TextLink to={paths.ledger()}>ledger</TextLink>}>Last acts</SectionHeading>
      <Region query={ledger} what="the last acts" lines={5}>
        {(data) => (
          <ul>
            {data.pages[0].entries.slice(0, 8).map((e) => (
              <li key={e.sequence} className="grid grid-cols-[12ch_minmax(0,1fr)_auto] items-baseline gap-x-3 border-b border-hairline py-[6px] text-13">
                <span className="text-ink-2">
                  <Time at={e.at} />
                </span>
                <span>
                  {e.person} <span className="text-ink-2">{e.act}{subjectWords(e) && `, ${subjectWords(e)}`}</span>
                </span>
                <Hash hash={e.hash} bytes={4} className="!text-12" />
              </li>
            ))}
          </ul>
        )}
      </Region>
    </section>
  )
}

const numerals = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten']
const inWords = (n: number) => numerals[n] ?? String(n)

/** "peer reviewer on dunlin and teasel, builder on dunlin". */
function rolesByMachine(roles: readonly { role: string; machine: string | null }[]): string {
  const machines = new Map<string, string[]>()
  for (const { role, machine } of roles) machines.set(role, [...(machines.get(role) ?? []), machine ?? 'all machines'])
  return [...machines].map(([role, on]) => `${role} on ${on.includes('all machines') ? 'all machines' : on.join(' and ')}`).join(', ') || 'no role yet: an administrator gives you one'
}
