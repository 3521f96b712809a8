import { useSuspenseQuery } from '@tanstack/react-query'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { Button } from '../components/ui/button.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { AuditSheet } from '../features/boards/components/audit-sheet.tsx'
import { boardsCsvHref, machineBoardsQuery } from '../features/boards/queries.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) => queryClient.ensureQueryData(machineBoardsQuery(params.machine!))

export function Component() {
  const query = useSuspenseQuery(machineBoardsQuery(useParams().machine!))
  const boards = query.data
  return (
    <div className="pt-4">
      <title>{`Audit of ${boards.machineName} · Detent`}</title>
      <style>{'@media print { @page { size: A4 landscape; margin: 10mm } }'}</style>
      <div className="no-print mb-3 flex flex-wrap gap-2">
        <Button kind="primary" onClick={() => window.print()}>
          Print the sheet
        </Button>
        <LinkButton to={paths.bench(boards.machine)}>To the bench</LinkButton>
        <LinkButton to={paths.machine(boards.machine)}>{boards.machineName}</LinkButton>
        <a className="btn" href={boardsCsvHref(boards.machine)} download>
          Export CSV
        </a>
      </div>
      <AuditSheet boards={boards} now={query.dataUpdatedAt} />
    </div>
  )
}
