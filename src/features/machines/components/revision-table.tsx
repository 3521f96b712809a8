import type { JointView } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { Time } from '../../../components/ui/time.tsx'

type Revision = JointView['history'][number]

/** A joint's revisions, newest first, each with the release that brought it. */
export function RevisionTable({ machine, history }: { machine: string; history: readonly Revision[] }) {
  const columns: Column<Revision>[] = [
    { key: 'revision', head: 'Revision', className: 'num', cell: (r) => `r${r.revision}` },
    { key: 'release', head: 'Release', cell: (r) => <TextLink className="num" to={paths.release(machine, r.release)}>{r.release}</TextLink> },
    { key: 'sequence', head: 'Sequence', align: 'end', className: 'num', cell: (r) => r.sequence },
    { key: 'at', head: 'Released', cell: (r) => <Time at={r.at} style="long" /> },
    { key: 'change', head: 'Change', cell: (r) => <><TextLink className="num" to={paths.change(r.change)}>{r.change}</TextLink> {r.title}</> },
  ]
  return <Table label="revisions" rows={history} columns={columns} rowKey={(r) => String(r.revision)} empty="This joint is not released yet." />
}
