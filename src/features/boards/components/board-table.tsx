import type { BoardSummary } from '../../../../shared/contract/boards.ts'
import { paths } from '../../../app/paths.ts'
import { BoardMark } from '../../../components/ui/board-mark.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { Table, type Column, type Sort } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { knownWords } from '../known-words.ts'

const columns: Column<BoardSummary>[] = [
  { key: 'serial', head: 'Board', className: 'num whitespace-nowrap', sortBy: (b) => b.serial, cell: (b) => b.serial },
  { key: 'machine', head: 'Machine', className: 'text-ink-2', sortBy: (b) => b.machineName, cell: (b) => b.machineName },
  { key: 'joint', head: 'Joint', className: 'whitespace-nowrap', sortBy: (b) => b.joint?.name ?? null, cell: (b) => (b.joint ? b.joint.name : <span className="text-ink-2">off its joint</span>) },
  { key: 'address', head: 'Address', className: 'whitespace-nowrap', sortBy: (b) => (b.joint?.address ?? null) && `${b.joint!.bus} ${String(b.joint!.address).padStart(3, '0')}`, cell: (b) => (b.joint?.address == null ? <Num value={null} /> : <><HexAddress address={b.joint.address} /> <span className="text-13 text-ink-2">{b.joint.bus}</span></>) },
  { key: 'release', head: 'Holds', className: 'num whitespace-nowrap', sortBy: (b) => b.release, cell: (b) => (b.release === null ? <Num value={null} /> : b.release) },
  { key: 'firmware', head: 'Firmware', className: 'num text-13 whitespace-nowrap', sortBy: (b) => b.firmware, cell: (b) => b.firmware ?? <Num value={null} /> },
  { key: 'state', head: 'State', className: 'whitespace-nowrap', sortBy: (b) => b.state, cell: (b) => <span title={b.why}>{b.retired ? <span className="text-ink-2">retired</span> : <BoardMark state={b.state} />}</span> },
  {
    key: 'known',
    head: 'How known',
    className: 'text-13 whitespace-nowrap',
    sortBy: (b) => b.knownAt,
    cell: (b) => (b.knownAt === null ? <span className="text-ink-2">{knownWords(b)}</span> : <>{knownWords(b)} <span className="text-ink-2"><Time at={b.knownAt} />, {b.knownBy}</span></>),
  },
]

export interface BoardTableProps {
  boards: readonly BoardSummary[]
  /** Columns that say the same in every row here. */
  without?: readonly string[]
  sort?: Sort | null
  onSort?: (sort: Sort | null) => void
  label?: string
  empty: string
}

export function BoardTable({ boards, without = [], sort, onSort, label = 'boards', empty }: BoardTableProps) {
  return <Table label={label} rows={boards} columns={columns.filter((c) => !without.includes(c.key))} rowKey={(b) => b.serial} rowTo={(b) => paths.board(b.serial)} sort={sort} onSort={onSort} empty={empty} />
}
