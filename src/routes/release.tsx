import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { refusal } from '../components/layout/refused.ts'
import { Button } from '../components/ui/button.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { Rail } from '../components/ui/rail.tsx'
import { railOf } from '../features/changes/rail-of.ts'
import { changeQuery } from '../features/changes/queries.ts'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { BoardsAffected } from '../features/boards/components/boards-affected.tsx'
import { BenchDownloads } from '../features/releases/components/bench-downloads.tsx'
import { ReleaseSheet } from '../features/releases/components/release-sheet.tsx'
import { WithdrawDialog } from '../features/releases/components/withdraw-dialog.tsx'
import { releaseQuery } from '../features/releases/queries.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) => queryClient.ensureQueryData(releaseQuery(params.machine!, params.version!))

export function Component() {
  const params = useParams()
  const release = useSuspenseQuery(releaseQuery(params.machine!, params.version!)).data
  const change = useQuery(changeQuery(release.change)).data
  const [withdrawing, setWithdrawing] = useState(false)
  const { withdraw } = release.may
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-6 pt-4 lg:grid-cols-[minmax(0,1fr)_340px]">
      <title>{`${release.machineName} ${release.version} · Detent`}</title>
      <ReleaseSheet release={release} rail={change && <Rail {...railOf(change)} />} />
      <aside className="no-print grid content-start gap-6 max-lg:order-first">
        <BenchDownloads release={release} />
        {release.state === 'withdrawn' && (
          <section aria-labelledby="holding">
            <SectionHeading id="holding" className="mb-1">
              Boards that hold it
            </SectionHeading>
            <BoardsAffected machine={release.machine} release={release.version} />
          </section>
        )}
        <div className="flex flex-wrap gap-2">
          <Button onClick={() => window.print()}>Print the sheet</Button>
          <LinkButton to={paths.compare({ a: `release:${release.machine}@${release.version}` })}>Compare…</LinkButton>
          {release.state !== 'withdrawn' && (
            <Button kind="danger" unavailable={refusal(withdraw)} onClick={() => setWithdrawing(true)}>
              Withdraw {release.version}…
            </Button>
          )}
        </div>
      </aside>
      <WithdrawDialog release={release} open={withdrawing} onClose={() => setWithdrawing(false)}>
        <BoardsAffected machine={release.machine} release={release.version} />
      </WithdrawDialog>
    </div>
  )
}
