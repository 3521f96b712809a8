import type { ReactNode } from 'react'
import { paths } from '../../../app/paths.ts'
import type { ChangeSummary } from '../../../../shared/contract/changes.ts'
import { SmallRail } from '../../../components/ui/small-rail.tsx'
import { Table, type Column, type Sort } from '../../../components/ui/table.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
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

/** Changes in rows: number, title, machine, writers, life as a small rail, base, last altered. Narrow screens read them as a list. */
export function ChangeTable(props: ChangeTableProps) {
  return (
    <>
      <div className="hidden md:block">
        <Rows {...props} />
      </div>
      <ul className="border-t border-ink md:hidden" aria-label={props.label}>
        {props.changes.length === 0 && <li className="py-3 text-ink-2">{props.empty ?? 'Nothing here.'}</li>}
        {props.changes.map((c) => (
          <li key={c.key} className="border-b border-hairline py-2">
            <p>
              <span className="num mr-2 text-ink-2">{c.number}</span>
              <TextLink to={placeOf(c)} className="!border-0 font-medium !text-ink">
                {c.title}
              </TextLink>
            </p>
            <p className="text-13 text-ink-2">
              {props.oneMachine ? '' : `${c.machineName}, `}
              {c.author}, <Time at={c.alteredAt} />
            </p>
            <SmallRail state={c.life} />
          </li>
        ))}
      </ul>
    </>
  )
}

/** A draft is opened where it is edited, anything else where it is read. */
const placeOf = (c: ChangeSummary) => (c.state === 'draft' ? paths.change(c.key) : paths.changeReview(c.key))

function Rows({ label, changes, oneMachine = false, empty, sort, onSort }: ChangeTableProps) {
  const columns: Column<ChangeSummary>[] = [
    { key: 'title', head: 'Change', cell: (c) => <><span className="num mr-3 inline-block w-[3ch] font-normal text-ink-2">{c.number}</span>{c.title}</>, sortBy: (c) => c.number },
    ...(oneMachine ? [] : [{ key: 'machine', head: 'Machine', cell: (c: ChangeSummary) => c.machineName, sortBy: (c: ChangeSummary) => c.machineName }]),
    { key: 'author', head: 'Author', cell: (c) => (c.writers.length > 1 ? <>{c.author} <span className="text-13 text-ink-2">and {c.writers.length - 1} more</span></> : c.author), sortBy: (c) => c.author },
    { key: 'life', head: 'Life', cell: (c) => <SmallRail state={c.life} />, sortBy: (c) => order.indexOf(c.life) },
    { key: 'base', head: 'From', cell: (c) => c.baseVersion ?? 'nothing', className: 'num text-ink-2', sortBy: (c) => c.baseVersion },
    { key: 'altered', head: 'Altered', align: 'end', cell: (c) => <span className="text-ink-2"><Time at={c.alteredAt} /></span>, sortBy: (c) => c.alteredAt },
  ]
  return <Table label={label} rows={changes} columns={columns} rowKey={(c) => c.key} rowTo={placeOf} empty={empty} sort={sort} onSort={onSort} />
}

const order: readonly ChangeSummary['life'][] = ['draft', 'returned', 'submitted', 'signature void', 'approved', 'released', 'cancelled']
