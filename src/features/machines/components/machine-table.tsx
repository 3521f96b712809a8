import type { MachineSummary } from '../../../../shared/contract/machines.ts'
import { useUrlSort } from '../../../components/layout/use-url-state.ts'
import { Num } from '../../../components/ui/num.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'

const columns: Column<MachineSummary>[] = [
  {
    key: 'name',
    head: 'Machine',
    className: 'whitespace-nowrap',
    sortBy: (m) => m.name,
    cell: (m) => (
      <>
        {m.name}
        {m.retired && <span className="font-normal text-ink-2"> retired</span>}
      </>
    ),
  },
  { key: 'description', head: 'What it is', cell: (m) => <span className="block min-w-[14rem]">{m.description}</span>, className: 'text-ink-2' },
  { key: 'joints', head: 'Joints', align: 'end', className: 'num', sortBy: (m) => m.joints, cell: (m) => m.joints },
  { key: 'buses', head: 'Buses', align: 'end', className: 'num', sortBy: (m) => m.buses, cell: (m) => m.buses },
  { key: 'version', head: 'Release', className: 'num', sortBy: (m) => m.currentVersion, cell: (m) => <Num value={m.currentVersion} /> },
  { key: 'open', head: 'Open changes', align: 'end', className: 'num', sortBy: (m) => m.openChanges, cell: (m) => m.openChanges },
]

export function MachineTable({ machines, rowTo }: { machines: readonly MachineSummary[]; rowTo: (machine: MachineSummary) => string }) {
  const [sort, setSort] = useUrlSort()
  return <Table label="machines" rows={machines} columns={columns} rowKey={(m) => m.key} rowTo={rowTo} sort={sort} onSort={setSort} />
}
