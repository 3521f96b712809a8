import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { Region } from '../components/layout/region.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { BenchJoint } from '../features/boards/components/bench-joint.tsx'
import { BenchPicker } from '../features/boards/components/bench-picker.tsx'
import { cardQuery, machineBoardsQuery } from '../features/boards/queries.ts'
import { queryClient } from '../lib/query-client.ts'
import { takeFile } from '../lib/take-file.ts'

export const loader = ({ params }: LoaderFunctionArgs) => queryClient.ensureQueryData(machineBoardsQuery(params.machine!))

const part = encodeURIComponent

export function Component() {
  const boards = useSuspenseQuery(machineBoardsQuery(useParams().machine!)).data
  const [joint] = useUrlText('joint')
  const [serial] = useUrlText('serial')
  const [allTheSame, setAllTheSame] = useUrlText('withdrawn')
  const release = boards.current ?? (allTheSame === '' ? null : boards.newest)
  const card = useQuery({ ...cardQuery(boards.machine, release?.version ?? '', joint), enabled: release !== null && joint !== '' })
  const picked = release !== null && joint !== ''
  return (
    <>
      <div className={picked ? 'max-lg:hidden' : ''}>
        <PageHead
          kicker={
            <>
              <TextLink to={paths.machine(boards.machine)}>{boards.machineName}</TextLink>, bench
            </>
          }
          title={release && boards.current ? `Flash ${boards.machineName} ${release.version}` : release ? `What was flashed: ${boards.machineName} ${release.version}, withdrawn` : `${boards.machineName} at the bench`}
          documentTitle={`Bench, ${boards.machineName}`}
          actions={<LinkButton to={paths.audit(boards.machine)}>Audit sheet</LinkButton>}
        />
      </div>
      {!release ? (
        <EmptyState
          title="There is nothing to flash"
          action={
            <>
              <LinkButton to={paths.releases(boards.machine)}>To its releases</LinkButton>
              {boards.newest && boards.mayRecord.allowed && <Button onClick={() => setAllTheSame('yes')}>Record what was flashed all the same</Button>}
            </>
          }
        >
          {boards.newest ? `${boards.newest.version} is withdrawn, and no release came after it. Boards that hold it wait for the next one.` : 'Nothing is released yet.'}
        </EmptyState>
      ) : (
        <div className="grid grid-cols-[minmax(0,1fr)] gap-x-12 lg:grid-cols-[360px_minmax(0,560px)]">
          <div className={picked ? 'max-lg:hidden' : ''}>
            <BenchPicker boards={boards} joint={joint || null} serial={serial || null} autoFocus={!picked} />
          </div>
          {picked && (
            <div className="pt-3 lg:pt-0">
              <TextLink className="mb-2 inline-block text-13 lg:hidden" to={paths.bench(boards.machine, { withdrawn: boards.current === null })}>
                all joints of {boards.machineName}
              </TextLink>
              <Region query={card} what="the joint" lines={8}>
                {(data) => (
                  <BenchJoint
                    key={`${joint} ${serial}`}
                    card={data}
                    boards={boards}
                    serial={serial || null}
                    takeFile={(format, board) => takeFile(`/api/machines/${part(data.machine)}/releases/${part(data.version)}/joints/${part(data.joint)}/image.${format}${board ? `?board=${part(board)}` : ''}`, `${data.machine}-${data.version}-${data.joint}.${format === 'write-list' ? 'csv' : format}`)}
                  />
                )}
              </Region>
            </div>
          )}
        </div>
      )}
    </>
  )
}
