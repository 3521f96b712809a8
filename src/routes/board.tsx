import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { refusal } from '../components/layout/refused.ts'
import { BoardMark } from '../components/ui/board-mark.tsx'
import { Button } from '../components/ui/button.tsx'
import { HexAddress } from '../components/ui/hex-address.tsx'
import { KeyValueList } from '../components/ui/key-value-list.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { Num } from '../components/ui/num.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { Time } from '../components/ui/time.tsx'
import { BoardHistory } from '../features/boards/components/board-history.tsx'
import { ReadBackDetails } from '../features/boards/components/read-back-result.tsx'
import { ReadBackDialog } from '../features/boards/components/read-back-dialog.tsx'
import { RetireBoardDialog } from '../features/boards/components/retire-board-dialog.tsx'
import { SeatDialog } from '../features/boards/components/seat-dialog.tsx'
import { knownWords } from '../features/boards/known-words.ts'
import { boardQuery, boardsQuery } from '../features/boards/queries.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) => queryClient.ensureQueryData(boardQuery(params.serial!))

export function Component() {
  const board = useSuspenseQuery(boardQuery(useParams().serial!)).data
  const [dialog, setDialog] = useState<'read' | 'move' | 'retire' | null>(null)
  const machines = useQuery(machinesQuery).data ?? []
  const recordable = useQuery({ ...boardsQuery(false), enabled: dialog === 'move' }).data?.mayRecordOn ?? [board.machine]
  const close = () => setDialog(null)
  const { joint, lastReadBack } = board
  return (
    <>
      <PageHead
        kicker={
          <>
            board of <TextLink to={paths.machine(board.machine)}>{board.machineName}</TextLink>
          </>
        }
        title={board.serial}
        documentTitle={`Board ${board.serial}`}
        aside={
          <KeyValueList
            entries={[
              { key: 'sits at', value: joint ? <><TextLink to={paths.joint(board.machine, joint.key)}>{joint.name}</TextLink>{joint.address !== null && <>, {joint.bus} <HexAddress address={joint.address} /></>}</> : 'no joint' },
              { key: 'holds', value: board.release ? <><TextLink className="num" to={paths.release(board.machine, board.release)}>{board.release}</TextLink>{board.imageOf && `, the image of ${board.imageOf}`}</> : 'not recorded' },
              { key: 'firmware', value: board.firmware ? <FirmwareLink name={board.firmware} /> : <Num value={null} /> },
              { key: 'known', value: board.knownAt ? <>{knownWords(board)} <Time at={board.knownAt} />, {board.knownBy}</> : knownWords(board) },
            ]}
          />
        }
        actions={
          <>
            {joint && board.newest && (
              <LinkButton kind="primary" to={paths.bench(board.machine, { joint: joint.key })}>
                Flash {board.newest}
              </LinkButton>
            )}
            <Button unavailable={refusal(board.may.readBack)} onClick={() => setDialog('read')}>
              Read back…
            </Button>
            <Button unavailable={refusal(board.may.move)} onClick={() => setDialog('move')}>
              Move…
            </Button>
            <Button kind="danger" unavailable={refusal(board.may.retire)} onClick={() => setDialog('retire')}>
              Retire…
            </Button>
          </>
        }
      >
        <span className="mt-1 flex flex-wrap items-center gap-x-3 text-ink">
          {board.retired ? 'retired' : <BoardMark state={board.state} />} <span className="text-13 text-ink-2">{board.why}</span>
        </span>
      </PageHead>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-12 gap-y-8 lg:grid-cols-[minmax(0,1fr)_minmax(0,1fr)]">
        <section aria-labelledby="history">
          <SectionHeading id="history">History</SectionHeading>
          <BoardHistory machine={board.machine} events={board.events} />
        </section>
        <section aria-labelledby="read-back" className="max-lg:order-first">
          <SectionHeading id="read-back" className="mb-2" aux={lastReadBack ? <>against <span className="num">{lastReadBack.release}</span></> : undefined}>
            Last read-back
          </SectionHeading>
          {lastReadBack ? <ReadBackDetails result={lastReadBack} /> : <p className="text-13 text-ink-2">It was never read back: what it holds is known by what people recorded alone.</p>}
        </section>
      </div>
      {dialog === 'read' && <ReadBackDialog board={board} onClose={close} />}
      {dialog === 'move' && <SeatDialog machines={machines.filter((m) => recordable.includes(m.key))} machine={board.machine} serial={board.serial} joint={joint?.key ?? null} onClose={close} />}
      {dialog === 'retire' && <RetireBoardDialog serial={board.serial} onClose={close} />}
    </>
  )
}

function FirmwareLink({ name }: { name: string }) {
  const [line, version] = name.split(' ')
  return (
    <TextLink className="num" to={paths.firmwareVersion(line, version)}>
      {name}
    </TextLink>
  )
}
