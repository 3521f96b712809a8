import type { ReactNode } from 'react'
import { paths } from '../../../app/paths.ts'
import type { ReleaseSummary } from '../../../../shared/contract/releases.ts'
import { ReleaseMark } from '../../../components/ui/release-mark.tsx'
import { Table, type Column, type Sort } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'

export interface ReleaseTableProps {
  releases: readonly ReleaseSummary[]
  oneMachine: boolean
  empty?: ReactNode
  sort: Sort | null
  onSort: (sort: Sort | null) => void
}

/** Releases in rows, newest first. */
export function ReleaseTable({ releases, oneMachine, empty, sort, onSort }: ReleaseTableProps) {
  const columns: Column<ReleaseSummary>[] = [
    { key: 'version', head: 'Release', cell: (r) => <>{oneMachine ? '' : `${r.machineName} `}<span className="num">{r.version}</span></>, sortBy: (r) => `${r.machineName} ${String(r.sequence).padStart(8, '0')}` },
    { key: 'state', head: 'State', cell: (r) => <ReleaseMark state={r.state} />, sortBy: (r) => r.state },
    { key: 'title', head: 'Change', cell: (r) => r.title, sortBy: (r) => r.title },
    { key: 'sequence', head: 'Sequence', align: 'end', cell: (r) => <span className="num text-ink-2">{r.sequence}</span>, sortBy: (r) => r.sequence },
    { key: 'joints', head: 'Joints', align: 'end', cell: (r) => <span className="num">{r.joints}</span>, sortBy: (r) => r.joints },
    { key: 'by', head: 'Released by', cell: (r) => r.releasedBy, sortBy: (r) => r.releasedBy },
    { key: 'at', head: 'When', align: 'end', cell: (r) => <span className="text-ink-2"><Time at={r.releasedAt} /></span>, sortBy: (r) => r.releasedAt },
  ]
  return <Table label="releases" rows={releases} columns={columns} rowKey={(r) => `${r.machine} ${r.version}`} rowTo={(r) => paths.release(r.machine, r.version)} empty={empty} sort={sort} onSort={onSort} />
}
