import type { JointSummary } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { useUrlSort } from '../../../components/layout/use-url-state.ts'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { SmallRail } from '../../../components/ui/small-rail.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { count } from '../../../lib/format.ts'

const columns: Column<JointSummary>[] = [
  {
    key: 'joint',
    head: 'Joint',
    sortBy: (j) => j.name,
    cell: (j) => (
      <>
        {j.name}
        {j.ownValues > 0 && <span className="text-13 font-normal text-ink-2"> {count(j.ownValues, 'own value')}</span>}
      </>
    ),
  },
  { key: 'bus', head: 'Bus', sortBy: (j) => j.bus, cell: (j) => j.bus, className: 'text-ink-2' },
  { key: 'address', head: 'Address', sortBy: (j) => j.address, cell: (j) => <HexAddress address={j.address} /> },
  { key: 'family', head: 'Family', sortBy: (j) => j.familyName, cell: (j) => j.familyName },
  { key: 'mode', head: 'Mode', sortBy: (j) => j.mode, cell: (j) => j.mode ?? <Num value={null} /> },
  { key: 'firmware', head: 'Firmware', className: 'num text-13', sortBy: (j) => j.firmware, cell: (j) => j.firmware },
  { key: 'revision', head: 'Revision', className: 'num', sortBy: (j) => j.revision, cell: (j) => (j.revision === null ? <Num value={null} /> : `r${j.revision}`) },
  {
    key: 'waiting',
    head: 'Waiting',
    sortBy: (j) => j.waiting[0]?.change ?? null,
    cell: (j) =>
      j.waiting.map((w) => (
        <SmallRail key={w.change} state={w.state}>
          <span className="num text-13 text-ink-2">{w.change.split('-').at(-1)}</span>
        </SmallRail>
      )),
  },
]

export interface JointTableProps {
  machine: string
  joints: readonly JointSummary[]
  /** Columns that say the same in every row here. */
  without?: readonly string[]
}

export function JointTable({ machine, joints, without = [] }: JointTableProps) {
  const [sort, setSort] = useUrlSort()
  return (
    <Table
      label="joints"
      rows={joints}
      columns={columns.filter((c) => !without.includes(c.key))}
      rowKey={(j) => j.key}
      rowTo={(j) => paths.joint(machine, j.key)}
      sort={sort}
      onSort={setSort}
      empty="No joint fits the filter."
    />
  )
}
