import type { JointBoard, MachineBoards } from '../../../../shared/contract/boards.ts'
import type { JointSummary } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { useUrlSort } from '../../../components/layout/use-url-state.ts'
import { BoardMark } from '../../../components/ui/board-mark.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { SmallRail } from '../../../components/ui/small-rail.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'

const columns: Column<JointSummary>[] = [
  {
    key: 'joint',
    head: 'Joint',
    className: 'whitespace-nowrap',
    sortBy: (j) => j.name,
    cell: (j) => (
      <>
        {j.name}
        {/* Most joints hold a position; what else one does is worth a word. */}
        {j.mode !== null && j.mode !== 'position' && <span className="text-13 font-normal text-ink-2"> {j.mode}</span>}
      </>
    ),
  },
  {
    key: 'address',
    head: 'Address',
    className: 'whitespace-nowrap',
    sortBy: (j) => `${j.bus} ${String(j.address).padStart(3, '0')}`,
    cell: (j) => (
      <>
        <HexAddress address={j.address} /> <span className="text-13 text-ink-2">{j.bus}</span>
      </>
    ),
  },
  { key: 'family', head: 'Family', className: 'whitespace-nowrap', sortBy: (j) => j.familyName, cell: (j) => j.familyName },
  { key: 'firmware', head: 'Firmware', className: 'num text-13 whitespace-nowrap', sortBy: (j) => j.firmware, cell: (j) => j.firmware },
  { key: 'revision', head: 'Revision', className: 'num', sortBy: (j) => j.revision, cell: (j) => (j.revision === null ? <Num value={null} /> : `r${j.revision}`) },
  { key: 'own', head: 'Own', align: 'end', className: 'num', sortBy: (j) => j.ownValues, cell: (j) => j.ownValues || '' },
  {
    key: 'waiting',
    head: 'Waiting',
    width: '7.5rem',
    sortBy: (j) => j.waiting[0]?.change ?? null,
    cell: (j) => (
      <span className="flex flex-wrap gap-x-3">
        {j.waiting.map((w) => (
          <SmallRail key={w.change} state={w.state}>
            <span className="num text-13 text-ink-2">
              {w.change.split('-').at(-1)}
              <span className="sr-only"> {w.state}</span>
            </span>
          </SmallRail>
        ))}
      </span>
    ),
  },
]

/** What is known of the board at each joint. */
function boardColumns(boards: MachineBoards): Column<JointSummary>[] {
  const at = new Map<string, JointBoard>(boards.joints.map((j) => [j.joint, j]))
  return [
    {
      key: 'board',
      head: 'Board',
      className: 'num whitespace-nowrap',
      sortBy: (j) => at.get(j.key)?.board?.serial ?? null,
      cell: (j) => {
        const serial = at.get(j.key)?.board?.serial
        return serial ? <TextLink className="row-link" to={paths.board(serial)}>{serial}</TextLink> : <span className="font-sans text-ink-2">none</span>
      },
    },
    { key: 'holds', head: 'Holds', className: 'num whitespace-nowrap', sortBy: (j) => at.get(j.key)?.board?.release ?? null, cell: (j) => <Num value={at.get(j.key)?.board?.release} /> },
    { key: 'state', head: 'State', className: 'whitespace-nowrap', sortBy: (j) => at.get(j.key)?.state ?? null, cell: (j) => <span title={at.get(j.key)?.why}><BoardMark state={at.get(j.key)?.state ?? 'unknown'} size={16} /></span> },
  ]
}

export interface JointTableProps {
  machine: string
  /** Adds what is known of their boards. */
  boards?: MachineBoards
  joints: readonly JointSummary[]
  /** Columns that say the same in every row here. */
  without?: readonly string[]
}

export function JointTable({ machine, boards, joints, without = [] }: JointTableProps) {
  const [sort, setSort] = useUrlSort()
  const known = boards ? boardColumns(boards) : []
  const last = columns.length - 1
  const all = [...columns.slice(0, last), ...known, columns[last]].map((c) => (boards && c.key === 'address' ? { ...c, cell: (j: JointSummary) => <HexAddress address={j.address} /> } : c))
  return (
    <Table
      className={`max-xl:overflow-x-auto ${boards ? '[&_td]:!px-[4px] [&_th]:!px-[4px]' : ''}`}
      label="joints"
      rows={joints}
      columns={all.filter((c) => !without.includes(c.key))}
      rowKey={(j) => j.key}
      rowTo={(j) => paths.joint(machine, j.key)}
      sort={sort}
      onSort={setSort}
      empty="No joint fits the filter."
    />
  )
}
