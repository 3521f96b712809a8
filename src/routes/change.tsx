import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useNavigate, useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import type { ChangeView } from '../../shared/contract/changes.ts'
import { CheckPanel } from '../features/checks/components/check-panel.tsx'
import { checkQuery } from '../features/checks/queries.ts'
import { ChangeEditor, type Looked } from '../features/changes/components/change-editor.tsx'
import { ChangeReader } from '../features/changes/components/change-reader.tsx'
import { changeQuery, firmwareChoicesQuery, firmwareNames, schemasQuery } from '../features/changes/queries.ts'
import { peopleQuery } from '../features/people/queries.ts'
import { versionQuery } from '../features/reviews/queries.ts'
import { useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

export async function loader({ params }: LoaderFunctionArgs) {
  const change = await queryClient.ensureQueryData(changeQuery(params.change!))
  void queryClient.prefetchQuery(checkQuery(change.key, change.revision))
  await queryClient.prefetchQuery(schemasQuery(change.key, firmwareNames(change.set, change.base)))
  return null
}

/** While others may be writing, their saves are read this often. */
const OTHERS = 10_000

export function Component() {
  const { change: key } = useParams()
  const change = useSuspenseQuery({ ...changeQuery(key!), refetchInterval: ({ state }) => (state.data?.state === 'draft' && state.data.writers.length > 1 ? OTHERS : false) }).data
  return change.may.edit.allowed ? <Editing key={change.key} change={change} /> : <Reading key={change.key} change={change} />
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

/** The check of the draft as saved; stale while anything on the screen is newer. */
function useLiveCheck({ state, joints }: Looked) {
  const { view } = state
  const query = useQuery(checkQuery(view.key, view.revision))
  const stale = state.saving !== 'saved' || query.isPlaceholderData || query.data === undefined
  const version = useQuery({ ...versionQuery(view.key, view.revision), enabled: !stale && query.data?.counts.block === 0 }).data
  return {
    check: query.data,
    stale,
    panel: <CheckPanel change={view.key} query={query} stale={stale && query.data !== undefined} joints={joints} nameOf={nameIn({ set: state.set, base: view.base })} reportTo={paths.changeCheck(view.key)} note={(f) => (view.concessions.some((c) => c.finding === f.key) ? <p className="text-12 text-plum">concession requested</p> : null)} />,
    proposes: version && !stale ? <>, proposes <span className="num">{version.version}</span></> : null,
  }
}

function Reading({ change }: { change: ChangeView }) {
  const query = useQuery(checkQuery(change.key, change.revision))
  return <ChangeReader change={change} findings={query.data?.findings ?? []} panel={(joints) => <CheckPanel change={change.key} query={query} stale={query.isPlaceholderData} joints={joints} nameOf={nameIn(change)} reportTo={paths.changeCheck(change.key)} />} />
}
