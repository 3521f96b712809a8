import type { ReactNode } from 'react'
import { paths } from '../../../app/paths.ts'
import type { ReleaseSummary } from '../../../../shared/contract/releases.ts'
import { ReleaseMark } from '../../../components/ui/release-mark.tsx'
import { Table, type Column, type Sort } from '../../../components/ui/table.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { Time } from '../../../components/ui/time.tsx'

export interface ReleaseTableProps {
  releases: readonly ReleaseSummary[]
  oneMachine: boolean
  empty?: ReactNode
  sort: Sort | null
  onSort: (sort: Sort | null) => void
}

/** Releases in rows, newest first. Narrow screens read them as a list. */
export function ReleaseTable(props: ReleaseTableProps) {
  return (
    <>
      <div className="hidden md:block">
        <Rows {...props} />
      </div>
      <ul className="border-t border-ink md:hidden" aria-label="releases">
        {props.releases.length === 0 && <li className="py-3 text-ink-2">{props.empty ?? 'Nothing here.'}</li>}
        {props.releases.map((r) => (
          <li key={`${r.machine} ${r.version}`} className="border-b border-hairline py-2">
            <p className="flex flex-wrap items-baseline gap-x-3">
              <TextLink to={paths.release(r.machine, r.version)} className="!border-0 font-medium !text-ink">
                {r.machineName} <span className="num">{r.version}</span>
              </TextLink>
              <ReleaseMark state={r.state} size={15} className="ml-auto text-13" />
            </p>
            <p className="text-13">{r.title}</p>
            <p className="text-13 text-ink-2">
              {r.releasedBy}, <Time at={r.releasedAt} />
            </p>
          </li>
        ))}
      </ul>
    </>
  )
}

function Rows({ releases, oneMachine, empty, sort, onSort }: ReleaseTableProps) {
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
