import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { boardStates } from '../../shared/contract/boards.ts'
import { FilterField } from '../components/layout/filter-field.tsx'
import { PageHead } from '../components/layout/page-head.tsx'
import { Region } from '../components/layout/region.tsx'
import { fits, useUrlSort, useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { Checkbox } from '../components/ui/checkbox.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { Select } from '../components/ui/select.tsx'
import { BoardCounts, countStates } from '../features/boards/components/board-counts.tsx'
import { BoardTable } from '../features/boards/components/board-table.tsx'
import { ImportDialog } from '../features/boards/components/import-dialog.tsx'
import { RecordMachineDialog } from '../features/boards/components/record-machine-dialog.tsx'
import { SeatDialog } from '../features/boards/components/seat-dialog.tsx'
import { boardsCsvHref, boardsQuery } from '../features/boards/queries.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => {
  void queryClient.prefetchQuery(boardsQuery(false))
  return null
}

const everyone = 'all'

export function Component() {
  const [machine, setMachine] = useUrlText('machine')
  const [state, setState] = useUrlText('state')
  const [known, setKnown] = useUrlText('known')
  const [place, setPlace] = useUrlText('place')
  const [retired, setRetired] = useUrlText('retired')
  const [filter, setFilter] = useUrlText('filter')
  const [sort, setSort] = useUrlSort()
  const [dialog, setDialog] = useState<'record' | 'machine' | 'import' | null>(null)
  const boards = useQuery(boardsQuery(retired !== ''))
  const machines = useQuery(machinesQuery).data ?? []
  const all = boards.data?.boards ?? []
  const ofMachine = all.filter((b) => machine === '' || b.machine === machine)
  const shown = ofMachine.filter(
    (b) =>
      (state === '' || b.state === state) &&
      (known === '' || (known === 'nothing' ? b.known === null : b.known === known)) &&
      (place === '' || (place === 'off') === (b.joint === null)) &&
      fits(filter, b.serial, b.machineName, b.joint?.name, b.joint?.key, b.joint?.bus, b.release, b.firmware, b.state, b.knownBy),
  )
  const recordable = machines.filter((m) => boards.data?.mayRecordOn.includes(m.key))
  const first = recordable.find((m) => m.key === machine) ?? recordable[0]
  const mayNot = !boards.data || first ? null : 'This takes the role builder, controls engineer or release manager on a machine.'
  const close = () => setDialog(null)
  const choice = (options: readonly [string, string][]) => options.map(([value, label]) => ({ value, label }))
  return (
    <>
      <PageHead
        title="Boards"
        aside={boards.data && <BoardCounts counts={countStates(ofMachine.filter((b) => !b.retired))} />}
        actions={
          <>
            <Button unavailable={mayNot} onClick={() => setDialog('record')}>
              Record a board…
            </Button>
            <Button unavailable={mayNot} onClick={() => setDialog('machine')}>
              Record a whole machine…
            </Button>
          </>
        }
      >
        {boards.data ? `${count(ofMachine.length, 'board')} on record` : 'which board holds which release'}
      </PageHead>
      <div className="mb-3 flex flex-wrap items-end gap-3">
        <Select label="Machine" hideLabel width={160} value={machine || everyone} onChange={(v) => setMachine(v === everyone ? '' : v)} options={choice([[everyone, 'all machines'], ...machines.map((m): [string, string] => [m.key, m.name])])} />
        <Select label="State" hideLabel width={230} value={state || everyone} onChange={(v) => setState(v === everyone ? '' : v)} options={choice([[everyone, 'all states'], ...boardStates.map((s): [string, string] => [s, s])])} />
        <Select label="How known" hideLabel width={170} value={known || everyone} onChange={(v) => setKnown(v === everyone ? '' : v)} options={choice([[everyone, 'however known'], ['read back', 'read back'], ['recorded', 'recorded'], ['nothing', 'nothing recorded']])} />
        <Select label="Place" hideLabel width={150} value={place || everyone} onChange={(v) => setPlace(v === everyone ? '' : v)} options={choice([[everyone, 'everywhere'], ['seated', 'at a joint'], ['off', 'off its joint']])} />
        <FilterField label="filter the boards" value={filter} onChange={setFilter} />
        <Checkbox className="self-center text-13" label="retired ones too" checked={retired !== ''} onChange={(on) => setRetired(on ? 'yes' : '')} />
        <span className="ml-auto flex gap-2 max-sm:ml-0">
          <a className="btn btn-small" href={boardsCsvHref(machine || undefined)} download>
            Export CSV
          </a>
          <Button small unavailable={mayNot} onClick={() => setDialog('import')}>
            Import…
          </Button>
        </span>
      </div>
      <Region
        query={boards}
        what="the boards"
        lines={8}
        isEmpty={(data) => data.boards.length === 0}
        empty={<EmptyState title="No board is on record yet">A board comes on record when its first flash is recorded at the bench, when a whole machine is recorded, or from a table.</EmptyState>}
      >
        {() => <BoardTable boards={shown} without={machine === '' ? [] : ['machine']} sort={sort} onSort={setSort} empty="No board fits this filter." />}
      </Region>
      {dialog === 'record' && first && <SeatDialog machines={recordable} machine={first.key} serial={null} joint={null} onClose={close} />}
      {dialog === 'machine' && first && <RecordMachineDialog machines={recordable} machine={first.key} onClose={close} />}
      {dialog === 'import' && first && <ImportDialog machines={recordable} machine={first.key} onClose={close} />}
    </>
  )
}
