import { useQuery } from '@tanstack/react-query'
import { PageHead } from '../components/layout/page-head.tsx'
import { FilterField } from '../components/layout/filter-field.tsx'
import { Region } from '../components/layout/region.tsx'
import { fits, useUrlSort, useUrlText } from '../components/layout/use-url-state.ts'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { Select } from '../components/ui/select.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { paths } from '../app/paths.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { ReleaseTable } from '../features/releases/components/release-table.tsx'
import { releasesQuery } from '../features/releases/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => {
  void queryClient.prefetchQuery(releasesQuery())
  return null
}

export function Component() {
  const [machine, setMachine] = useUrlText('machine')
  const [state, setState] = useUrlText('state')
  const [filter, setFilter] = useUrlText('filter')
  const [sort, setSort] = useUrlSort()
  const releases = useQuery(releasesQuery())
  const machines = useQuery(machinesQuery).data ?? []
  const shown = (releases.data ?? []).filter((r) => (machine === '' || r.machine === machine) && (state === '' || r.state === state) && fits(filter, r.version, r.machineName, r.title, r.change, r.releasedBy))
  return (
    <>
      <PageHead title="Releases">{releases.data ? `${count(releases.data.length, 'release')}, ${releases.data.filter((r) => r.state === 'current').length} current` : 'immutable, signed sets of revisions'}</PageHead>
      <div className="mb-3 flex flex-wrap items-end gap-3">
        <Select label="Machine" hideLabel value={machine === '' ? 'all' : machine} onChange={(v) => setMachine(v === 'all' ? '' : v)} options={[{ value: 'all', label: 'all machines' }, ...machines.map((m) => ({ value: m.key, label: m.name }))]} width={180} />
        <Select label="State" hideLabel value={state === '' ? 'all' : state} onChange={(v) => setState(v === 'all' ? '' : v)} options={['all', 'current', 'superseded', 'withdrawn'].map((s) => ({ value: s, label: s === 'all' ? 'all states' : s }))} width={160} />
        <FilterField label="filter the releases" value={filter} onChange={setFilter} />
      </div>
      <Region query={releases} what="the releases" lines={6} isEmpty={(all) => all.length === 0} empty={<EmptyState title="No release yet" action={<LinkButton to={paths.changes()}>To the changes</LinkButton>}>A release is made when a release manager signs an approved change.</EmptyState>}>
        {() => <ReleaseTable releases={shown} oneMachine={machine !== ''} sort={sort} onSort={setSort} empty="No release fits this filter." />}
      </Region>
    </>
  )
}
