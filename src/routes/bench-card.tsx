import { useSuspenseQuery } from '@tanstack/react-query'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { Button } from '../components/ui/button.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { BenchCardSheet } from '../features/boards/components/bench-card-sheet.tsx'
import { cardQuery } from '../features/boards/queries.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) => queryClient.ensureQueryData(cardQuery(params.machine!, params.version!, params.joint!))

export function Component() {
  const params = useParams()
  const card = useSuspenseQuery(cardQuery(params.machine!, params.version!, params.joint!)).data
  return (
    <div className="pt-4">
      <title>{`Bench card ${card.name}, ${card.machineName} ${card.version} · Detent`}</title>
      <style>{'@media print { @page { size: A5 portrait; margin: 7mm } }'}</style>
      <div className="no-print mx-auto mb-3 flex max-w-[148mm] flex-wrap gap-2">
        <Button kind="primary" onClick={() => window.print()}>
          Print on A5
        </Button>
        {card.state === 'current' && <LinkButton to={paths.bench(card.machine, { joint: card.joint })}>Flash it</LinkButton>}
        <LinkButton to={paths.release(card.machine, card.version)}>Release {card.version}</LinkButton>
      </div>
      <BenchCardSheet card={card} />
    </div>
  )
}
