import { useQuery, useQueryClient, useSuspenseQuery } from '@tanstack/react-query'
import { use, useCallback, useMemo, useState } from 'react'
import { useNavigate, useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import type { ChangeView } from '../../shared/contract/changes.ts'
import type { Finding } from '../../shared/contract/checks.ts'
import { CheckPanel } from '../features/checks/components/check-panel.tsx'
import { Proposals } from '../features/checks/components/proposals.tsx'
import { worstOf } from '../features/checks/figures.ts'
import { checkQuery, quickQuery, stretchesQuery } from '../features/checks/queries.ts'
import { ChangeEditor, type Looked } from '../features/changes/components/change-editor.tsx'
import { ChangeReader } from '../features/changes/components/change-reader.tsx'
import { laidOnto } from '../features/changes/laid-onto.ts'
import { placeWords } from '../features/changes/place-words.ts'
import { changeQuery, firmwareChoicesQuery, firmwareNames, schemasQuery } from '../features/changes/queries.ts'
import { editsAbout, figuresFollowFrom } from '../features/changes/quick-question.ts'
import { noStretches, type UnstableStretches } from '../features/changes/unstable-context.ts'
import { peopleQuery } from '../features/people/queries.ts'
import { PresenceLine } from '../features/reviews/components/presence-line.tsx'
import { SavedLine, type OthersSave } from '../features/reviews/components/saved-line.tsx'
import { PresentContext } from '../features/reviews/present-context.ts'
import { versionQuery } from '../features/reviews/queries.ts'
import { useChangeEvents } from '../features/reviews/use-change-events.ts'
import { useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'
import { ChangeTools } from './change-tools.tsx'

export async function loader({ params }: LoaderFunctionArgs) {
  const change = await queryClient.ensureQueryData(changeQuery(params.change!))
  void queryClient.prefetchQuery(checkQuery(change.key, change.revision))
  await queryClient.prefetchQuery(schemasQuery(change.key, firmwareNames(change.set, change.base)))
  return null
}

/** Others' saves are told of as they happen; where no stream reaches the page, they are read this often, ms. */
const OTHERS = 60_000

export function Component() {
  const { change: key } = useParams()
  const change = useSuspenseQuery({ ...changeQuery(key!), refetchInterval: ({ state }) => (state.data?.state === 'draft' && state.data.writers.length > 1 ? OTHERS : false) }).data
  const { present, saved, seen } = useOthers(change)
  return (
    <PresentContext value={present}>
      {change.may.edit.allowed ? <Editing key={change.key} change={change} /> : <Reading key={change.key} change={change} />}
      <SavedLine saved={saved} onSeen={seen} />
    </PresentContext>
  )
}

/** Who else has the change open, and what they saved last. */
function useOthers(change: ChangeView) {
  const me = useMe()
  const client = useQueryClient()
  const schemas = useQuery(schemasQuery(change.key, firmwareNames(change.set, change.base))).data ?? {}
  const [saved, setSaved] = useState<OthersSave | null>(null)
  const refresh = () => void client.invalidateQueries({ queryKey: changeQuery(change.key).queryKey })
  const present = useChangeEvents(change.key, 'values', {
    onNews: (news) => {
      const mine = news.by === me.name
      if (news.kind === 'saved' && !mine) setSaved({ by: news.by, at: news.at, places: news.pointers.map((p) => placeWords(p, [change.set, change.base], schemas)) })
      // The page that has the focus knows what it saved itself; another page of the same person does not.
      if (news.kind !== 'comment' && news.revision > change.revision && !(mine && document.hasFocus())) refresh()
    },
    onMissed: refresh,
  })
  return { present, saved, seen: () => setSaved(null) }
}

const nameIn = (change: Pick<ChangeView, 'set' | 'base'>) => (joint: string) => change.set.joints[joint]?.name ?? change.base.joints[joint]?.name ?? joint

function Editing({ change }: { change: ChangeView }) {
  const me = useMe()
  const navigate = useNavigate()
  const people = useQuery(peopleQuery).data?.people ?? []
  const firmware = useQuery(firmwareChoicesQuery).data ?? []
  const drafting = people.filter((p) => p.state === 'active' && p.roles.some((r) => r.role === 'controls engineer' && (r.machine === null || r.machine === change.machine)))
  return <ChangeEditor change={change} personId={me.id} people={drafting} firmware={firmware} useCheck={useLiveCheck} onSubmitted={() => void navigate(paths.changeReview(change.key))} />
}

/** The check of the draft: of the joint looked at within a blink of each key, of every joint once it is saved; stale while anything on the screen is newer. */
function useLiveCheck({ state, tried, joints, rulersOf, onEdit }: Looked) {
  const { view } = state
  const present = use(PresentContext)
  const query = useQuery(checkQuery(view.key, view.revision))
  const stale = state.saving !== 'saved' || tried.length > 0 || query.isPlaceholderData || query.data === undefined
  const worst = query.data ? worstOf(query.data.joints.filter((j) => joints.includes(j.joint))) : null
  const quick = useQuick({ state, tried, joint: worst?.joint ?? joints[0] ?? null, stale })
  const unstable = useUnstable({ state, joint: worst?.candidate ? worst.joint : null, stale, rulersOf })
  const version = useQuery({ ...versionQuery(view.key, view.revision), enabled: !stale && query.data?.counts.block === 0 }).data
  const nameOf = useMemo(() => nameIn({ set: state.set, base: view.base }), [state.set, view.base])
  const note = useCallback((f: Finding) => (view.concessions.some((c) => c.finding === f.key) ? <p className="text-12 text-plum">concession requested</p> : null), [view.concessions])
  return {
    check: query.data,
    stale,
    unstable,
    panel: (
      <>
        <CheckPanel
          change={view.key}
          query={query}
          stale={stale && query.data !== undefined}
          quick={quick}
          joints={joints}
          nameOf={nameOf}
          reportTo={paths.changeCheck(view.key)}
          note={note}
        />
        {worst?.candidate && <Proposals change={view.key} revision={view.revision} joint={worst} nameOf={nameOf} unavailable={stale ? 'The check of the values as they stand is running.' : null} onApply={onEdit} />}
        <ChangeTools change={view} joints={joints} unavailable={state.saving === 'saved' ? null : 'The values are being saved.'} />
      </>
    ),
    proposes: (
      <>
        {version && !stale && <>, proposes <span className="num">{version.version}</span></>}
        <PresenceLine present={present} className="ml-4" />
      </>
    ),
  }
}

/** The joint looked at with what is typed and what is being saved; nothing once the whole check knows as much. */
function useQuick({ state: { view, set, pending }, tried, joint, stale }: Pick<Looked, 'state' | 'tried'> & { joint: string | null; stale: boolean }) {
  const shown = useMemo(() => laidOnto(set, tried), [set, tried])
  const as = joint === null ? null : figuresFollowFrom(shown, joint)
  const saved = joint === null ? null : figuresFollowFrom(view.set, joint)
  const edits = joint === null ? [] : editsAbout([...pending, ...tried], shown, joint)
  const query = useQuery({ ...quickQuery({ change: view.key, joint: joint ?? '', as: as ?? '', edits }), enabled: stale && as !== null && as !== saved })
  return stale && query.data ? { view: query.data, stale: query.isPlaceholderData } : undefined
}

/** Where along its rulers the joint looked at would not be stable. */
function useUnstable({ state: { view }, joint, stale, rulersOf }: Pick<Looked, 'state' | 'rulersOf'> & { joint: string | null; stale: boolean }): UnstableStretches {
  const rulers = joint === null ? [] : rulersOf(joint)
  const { data } = useQuery({ ...stretchesQuery(view.key, view.revision, { joint: joint ?? '', rulers }), enabled: !stale && rulers.length > 0 })
  return useMemo(() => (data ? { joint: data.joint, stretches: new Map(data.rulers.map((r) => [r.parameter, r.unstable])), stale } : noStretches), [data, stale])
}

function Reading({ change }: { change: ChangeView }) {
  const query = useQuery(checkQuery(change.key, change.revision))
  return <ChangeReader change={change} findings={query.data?.findings ?? []} panel={(joints) => (
    <>
      <CheckPanel change={change.key} query={query} stale={query.isPlaceholderData} joints={joints} nameOf={nameIn(change)} reportTo={paths.changeCheck(change.key)} />
      <ChangeTools change={change} joints={joints} unavailable={null} />
    </>
  )} />
}
