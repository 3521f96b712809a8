import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useNavigate, useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { FilterField } from '../components/layout/filter-field.tsx'
import { PageHead } from '../components/layout/page-head.tsx'
import { fits, useUrlText } from '../components/layout/use-url-state.ts'
import { Region } from '../components/layout/region.tsx'
import { BoardMark } from '../components/ui/board-mark.tsx'
import { Checkbox } from '../components/ui/checkbox.tsx'
import { ErrorPanel } from '../components/ui/error-panel.tsx'
import { Hash } from '../components/ui/hash.tsx'
import { HexAddress } from '../components/ui/hex-address.tsx'
import { KeyValueList } from '../components/ui/key-value-list.tsx'
import { Num } from '../components/ui/num.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { BoardHistory } from '../features/boards/components/board-history.tsx'
import { jointBoardsQuery, machineBoardsQuery } from '../features/boards/queries.ts'
import { JointEvidence } from '../features/evidence/components/joint-evidence.tsx'
import { DriveTrainSheet } from '../features/machines/components/drive-train.tsx'
import { DraftChangeButton } from '../features/machines/components/draft-change-button.tsx'
import { MachineFrame } from '../features/machines/components/machine-frame.tsx'
import { FromRelease } from '../features/machines/components/release-shown.tsx'
import { RevisionTable } from '../features/machines/components/revision-table.tsx'
import { ValueTable } from '../features/machines/components/value-table.tsx'
import { WaitingChanges } from '../features/machines/components/waiting-changes.tsx'
import { jointQuery, machineQuery } from '../features/machines/queries.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) =>
  Promise.all([queryClient.ensureQueryData(machineQuery(params.machine!)), queryClient.ensureQueryData(jointQuery(params.machine!, params.joint!))])

export function Component() {
  const params = useParams()
  const navigate = useNavigate()
  const machine = useSuspenseQuery(machineQuery(params.machine!)).data
  const atJoint = useQuery(jointBoardsQuery(params.machine!, params.joint!))
  const boards = useQuery(machineBoardsQuery(params.machine!)).data
  const joint = useSuspenseQuery(jointQuery(params.machine!, params.joint!)).data
  const [filter, setFilter] = useUrlText('filter')
  const [own, setOwn] = useUrlText('own')
  const values = joint.values.filter((v) => (own === '' || v.origin === 'joint') && fits(filter, v.name, v.title, v.unit, v.role, v.register && `0x${v.register.address.toString(16)}`))
  const waiting = machine.changes.filter((c) => joint.waiting.some((w) => w.change === c.key))
  return (
    <>
      <PageHead
        kicker={
          <>
              <TextLink to={paths.machine(joint.machine)}>{joint.machineName}</TextLink>, joint
          </>
        }
        title={joint.name}
        documentTitle={`${joint.name}, ${joint.machineName}`}
        aside={
          <KeyValueList
            entries={[
              { key: 'family', value: <TextLink to={paths.family(joint.machine, joint.family)}>{joint.familyName}</TextLink> },
              { key: 'bus', value: <><TextLink to={paths.bus(joint.machine, joint.bus)}>{joint.busSettings.name}</TextLink> at <HexAddress address={joint.address} /></> },
              { key: 'firmware', value: <FirmwareLink name={joint.firmware} /> },
            ]}
          />
        }
        actions={
          <>
            <div className="mr-2 text-right max-sm:text-left">
              <div className="text-13 text-ink-2">revision, release</div>
              <div className="text-16">
                <span className="num">{joint.revision === null ? '–' : `r${joint.revision}`}</span>, <FromRelease machine={joint.machine} shown={joint.shown} />
              </div>
            </div>
            <DraftChangeButton machine={machine} />
          </>
        }
      />
      <MachineFrame machine={machine} boards={boards} bus={joint.bus} joint={joint.key}>
        {joint.problems.length > 0 && (
          <ErrorPanel className="mb-5" title="These values can't be encoded" whatToDo="Draft a change that mends them, or that moves the joint to another firmware version." pointers={joint.problems.map((p) => ({ pointer: p.pointer, message: p.detail }))} />
        )}
        {waiting.length > 0 && (
          <section aria-labelledby="waiting" className="mb-8">
            <SectionHeading id="waiting">Waiting</SectionHeading>
            <WaitingChanges changes={waiting} />
          </section>
        )}
        <section aria-labelledby="values" className="mb-8">
          <SectionHeading id="values" aux={joint.settings.board ? <>board-bound values measured on <span className="num">{joint.settings.board}</span></> : undefined} actions={<FilterField label="filter values" value={filter} onChange={setFilter} />}>
            Values
          </SectionHeading>
          <Checkbox className="my-1 text-13" label="only the joint's own" checked={own !== ''} onChange={(on) => setOwn(on ? 'yes' : '')} />
          <ValueTable values={values} />
          {joint.imageSha256 && (
            <p className="mt-2 text-13 text-ink-2">
              image SHA-256 <Hash hash={joint.imageSha256} />
            </p>
          )}
        </section>
        <section aria-labelledby="drive" className="mb-8">
          <SectionHeading id="drive" aux={joint.driveTrainNumber === null ? undefined : <>of the family, <span className="num">d{joint.driveTrainNumber}</span></>}>
            Drive train
          </SectionHeading>
          <DriveTrainSheet driveTrain={joint.driveTrain} />
        </section>
        <JointEvidence machine={joint.machine} joint={joint.key} onSent={(number) => void navigate(paths.evidence(joint.machine, number))} />
        <section aria-labelledby="boards" className="mb-8">
          <SectionHeading id="boards" actions={<TextLink to={paths.bench(joint.machine, { joint: joint.key })}>bench</TextLink>}>
            Boards
          </SectionHeading>
          <Region query={atJoint} what="its boards" lines={3}>
            {(data) => (
              <>
                <p className="flex flex-wrap items-center gap-x-3 py-1">
                  {data.board && <TextLink className="num" to={paths.board(data.board.serial)}>{data.board.serial}</TextLink>}
                  <BoardMark state={data.state} />
                  <span className="text-13 text-ink-2">{data.why}</span>
                </p>
                <BoardHistory machine={joint.machine} events={data.events} />
              </>
            )}
          </Region>
        </section>
        <section aria-labelledby="history">
          <SectionHeading id="history">History</SectionHeading>
          <RevisionTable machine={joint.machine} history={joint.history} />
        </section>
      </MachineFrame>
    </>
  )
}

function FirmwareLink({ name }: { name: string }) {
  const [line, version] = name.split(' ')
  return version ? <TextLink className="num" to={paths.firmwareVersion(line, version)}>{name}</TextLink> : <Num value={name} />
}
