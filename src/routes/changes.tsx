import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useNavigate } from 'react-router'
import { paths } from '../app/paths.ts'
import { changeStates } from '../../shared/contract/changes.ts'
import { FilterField } from '../components/layout/filter-field.tsx'
import { PageHead } from '../components/layout/page-head.tsx'
import { Region } from '../components/layout/region.tsx'
import { fits, useUrlSort, useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { Select } from '../components/ui/select.tsx'
import { ChangeTable } from '../features/changes/components/change-table.tsx'
import { DraftChangeDialog } from '../features/changes/components/draft-change-dialog.tsx'
import { changesQuery } from '../features/changes/queries.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { count } from '../lib/format.ts'
import { holds, useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => {
  void queryClient.prefetchQuery(changesQuery())
  return null
}

export function Component() {
  const me = useMe()
  const navigate = useNavigate()
  const [machine, setMachine] = useUrlText('machine')
  const [state, setState] = useUrlText('state')
  const [filter, setFilter] = useUrlText('filter')
  const [sort, setSort] = useUrlSort()
  const [drafting, setDrafting] = useState(false)
  const changes = useQuery(changesQuery())
  const machines = (useQuery(machinesQuery).data ?? []).filter((m) => !m.retired)
  const draftable = machines.filter((m) => holds(me, 'draft changes', m.key))
  const shown = (changes.data ?? []).filter((c) => (machine === '' || c.machine === machine) && (state === '' || c.life === state || c.state === state) && fits(filter, c.number, c.key, c.title, c.machineName, ...c.writers))
  const draft = draftable.length > 0 && (
    <Button kind="primary" onClick={() => setDrafting(true)}>
      Draft a change…
    </Button>
  )
  return (
    <>
      <PageHead title="Changes" actions={draft}>
        {changes.data ? `${count(changes.data.filter((c) => c.state !== 'released' && c.state !== 'cancelled').length, 'change')} not yet released, ${changes.data.length} in all` : 'proposals, from draft to release'}
      </PageHead>
      <div className="mb-3 flex flex-wrap items-end gap-3">
        <Select label="Machine" hideLabel value={machine === '' ? 'all' : machine} onChange={(v) => setMachine(v === 'all' ? '' : v)} options={[{ value: 'all', label: 'all machines' }, ...machines.map((m) => ({ value: m.key, label: m.name }))]} width={180} />
        <Select label="State" hideLabel value={state === '' ? 'all' : state} onChange={(v) => setState(v === 'all' ? '' : v)} options={[{ value: 'all', label: 'all states' }, ...[...changeStates, 'returned', 'signature void'].map((s) => ({ value: s, label: s }))]} width={160} />
        <FilterField label="filter the changes" value={filter} onChange={setFilter} />
      </div>
      <Region
        query={changes}
        what="the changes"
        lines={8}
        isEmpty={(all) => all.length === 0}
        empty={
          <EmptyState title="No change yet" action={draft}>
            A change carries values, model, addresses and firmware versions of one machine from draft to release. {draftable.length === 0 && 'A controls engineer drafts the first.'}
          </EmptyState>
        }
      >
        {() => <ChangeTable label="changes" changes={shown} oneMachine={machine !== ''} sort={sort} onSort={setSort} empty="No change fits this filter." />}
      </Region>
      {drafting && <DraftChangeDialog machines={draftable} machine={machine || null} onDrafted={(key) => void navigate(paths.change(key))} onClose={() => setDrafting(false)} />}
    </>
  )
}
