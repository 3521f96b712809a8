import type { ReactNode } from 'react'
import { paths } from '../../../app/paths.ts'
import type { ChangeSummary } from '../../../../shared/contract/changes.ts'
import { SmallRail } from '../../../components/ui/small-rail.tsx'
import { Table, type Column, type Sort } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'

export interface ChangeTableProps {
  label: string
  changes: readonly ChangeSummary[]
  /** leave the machine's column out */
  oneMachine?: boolean
  empty?: ReactNode
  sort?: Sort | null
  onSort?: (sort: Sort | null) => void
}

/** Changes in rows: number, title, machine, writers, life as a small rail, base, last altered. */
export function ChangeTable({ label, changes, oneMachine = false, empty, sort, onSort }: ChangeTableProps) {
  const columns: Column<ChangeSummary>[] = [
    { key: 'title', head: 'Change', cell: (c) => <><span className="num mr-3 inline-block w-[3ch] font-normal text-ink-2">{c.number}</span>{c.title}</>, sortBy: (c) => c.number },
    ...(oneMachine ? [] : [{ key: 'machine', head: 'Machine', cell: (c: ChangeSummary) => c.machineName, sortBy: (c: ChangeSummary) => c.machineName }]),
    { key: 'author', head: 'Author', cell: (c) => (c.writers.length > 1 ? <>{c.author} <span className="text-13 text-ink-2">and {c.writers.length - 1} more</span></> : c.author), sortBy: (c) => c.author },
    { key: 'life', head: 'Life', cell: (c) => <SmallRail state={c.life} />, sortBy: (c) => order.indexOf(c.life) },
    { key: 'base', head: 'From', cell: (c) => c.baseVersion ?? 'nothing', className: 'num text-ink-2', sortBy: (c) => c.baseVersion },
    { key: 'altered', head: 'Altered', align: 'end', cell: (c) => <span className="text-ink-2"><Time at={c.alteredAt} /></span>, sortBy: (c) => c.alteredAt },
  ]
  return <Table label={label} rows={changes} columns={columns} rowKey={(c) => c.key} rowTo={(c) => (c.state === 'draft' ? paths.change(c.key) : paths.changeReview(c.key))} empty={empty} sort={sort} onSort={onSort} />
}

const order: readonly ChangeSummary['life'][] = ['draft', 'returned', 'submitted', 'signature void', 'approved', 'released', 'cancelled']
