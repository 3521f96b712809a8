import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { Acts } from '../components/layout/acts.tsx'
import { FilterField } from '../components/layout/filter-field.tsx'
import { PageHead } from '../components/layout/page-head.tsx'
import { refusal } from '../components/layout/refused.ts'
import { fits, useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { BoardCounts } from '../features/boards/components/board-counts.tsx'
import { machineBoardsQuery } from '../features/boards/queries.ts'
import { DescribeMachineDialog } from '../features/machines/components/describe-machine-dialog.tsx'
import { DoubledAddresses } from '../features/machines/components/doubled-addresses.tsx'
import { DraftChangeButton } from '../features/machines/components/draft-change-button.tsx'
import { FamilyList } from '../features/machines/components/family-list.tsx'
import { JointTable } from '../features/machines/components/joint-table.tsx'
import { CurrentRelease } from '../features/machines/components/release-shown.tsx'
import { RetireMachineDialog } from '../features/machines/components/retire-machine-dialog.tsx'
import { Spines } from '../features/machines/components/spines.tsx'
import { WaitingChanges } from '../features/machines/components/waiting-changes.tsx'
import { machineQuery } from '../features/machines/queries.ts'
import { count } from '../lib/format.ts'
import { holds, useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) => {
  void queryClient.prefetchQuery(machineBoardsQuery(params.machine!))
  return queryClient.ensureQueryData(machineQuery(params.machine!))
}

/** Columns of the page: as many spines beside each other as there is room for, up to three. */
const beside = (buses: number) =>
  buses < 2 ? 'lg:grid-cols-[300px_minmax(0,1fr)] xl:grid-cols-[400px_minmax(0,1fr)]' : buses === 2 ? 'lg:grid-cols-[450px_minmax(0,1fr)]' : 'lg:grid-cols-[450px_minmax(0,1fr)] xl:grid-cols-[686px_minmax(0,1fr)]'

export function Component() {
  const params = useParams()
  const machine = useSuspenseQuery(machineQuery(params.machine!)).data
  const boards = useQuery(machineBoardsQuery(params.machine!)).data
  const keeps = holds(useMe(), 'make machines', params.machine!)
  const [dialog, setDialog] = useState<'describe' | 'retire' | null>(null)
  const [filter, setFilter] = useUrlText('filter')
  const close = () => setDialog(null)
  const open = machine.changes.filter((c) => c.state !== 'released' && c.state !== 'cancelled')
  const joints = machine.jointList.filter((j) => fits(filter, j.name, j.key, j.bus, j.familyName, j.firmware, j.mode, `0x${j.address.toString(16)}`))
  const size = [machine.description, `${count(machine.joints, 'joint')} on ${count(machine.buses, 'bus', 'buses')}`].filter(Boolean).join(', ')
  return (
    <>
      <PageHead
        kicker={machine.retired ? 'machine, retired' : 'machine'}
        title={machine.name}
        aside={
          <div className="flex flex-wrap items-end gap-x-10 gap-y-3">
            <CurrentRelease machine={machine.key} current={machine.currentRelease} shown={machine.shown} />
            {boards && boards.joints.length > 0 && (
              <div>
                <div className="flex gap-4 text-13">
                  <TextLink to={paths.boards({ machine: machine.key })}>boards</TextLink>
                  <TextLink to={paths.bench(machine.key)}>bench</TextLink>
                  <TextLink to={paths.audit(machine.key)}>audit sheet</TextLink>
                </div>
                <BoardCounts counts={boards.counts} />
              </div>
            )}
          </div>
        }
        actions={
          <>
            <DraftChangeButton machine={machine} />
            {keeps && (
              <>
                <Button unavailable={refusal(machine.may.describe)} onClick={() => setDialog('describe')}>
                  Describe…
                </Button>
                <Button kind="danger" unavailable={refusal(machine.may.retire)} onClick={() => setDialog('retire')}>
                  Retire…
                </Button>
              </>
            )}
          </>
        }
      >
        {size}
      </PageHead>
      <div className={`grid grid-cols-[minmax(0,1fr)] gap-x-10 gap-y-8 ${beside(machine.busList.length)}`}>
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-8 max-lg:contents">
          {machine.busList.length > 0 && (
            <section aria-label="buses">
              <Spines machine={machine} boards={boards} />
              <DoubledAddresses machine={machine} />
            </section>
          )}
          {machine.familyList.length > 0 && (
            <section aria-labelledby="families" className="max-lg:order-2">
              <SectionHeading id="families">Families</SectionHeading>
              <FamilyList machine={machine} />
            </section>
          )}
          <section aria-labelledby="acts" className="max-lg:order-3">
            <SectionHeading id="acts" actions={<TextLink to={paths.ledger({ machine: machine.key })}>ledger</TextLink>}>
              Last acts
            </SectionHeading>
            {machine.lastActs.length > 0 ? <Acts entries={machine.lastActs} /> : <p className="py-2 text-13 text-ink-2">Nothing was done here yet.</p>}
          </section>
        </div>
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-8 max-lg:order-1">
          <section aria-labelledby="waiting">
            <SectionHeading id="waiting" aux={open.length > 0 && machine.busList.length > 0 ? `${count(open.length, 'change')} not released; the ball on a tap marks its joint` : undefined}>
              Waiting
            </SectionHeading>
            {open.length > 0 ? <WaitingChanges changes={open} /> : <p className="py-2 text-13 text-ink-2">No change of {machine.name} waits. <TextLink to={paths.changes(machine.key)}>All its changes</TextLink></p>}
          </section>
          {machine.jointList.length === 0 ? (
            <EmptyState title={machine.busList.length === 0 ? 'Nothing is released yet.' : 'There is no joint yet.'}>
              Buses, families and joints are drafted in a change, checked, signed and released like every value.
            </EmptyState>
          ) : (
            <section aria-labelledby="joints">
              <SectionHeading id="joints" actions={<FilterField label="filter joints" value={filter} onChange={setFilter} />}>
                Joints
              </SectionHeading>
              <JointTable machine={machine.key} boards={boards} joints={joints} without={boards ? ['family', 'firmware', 'own'] : []} />
            </section>
          )}
        </div>
      </div>
      {dialog === 'describe' && <DescribeMachineDialog machine={machine} onClose={close} />}
      {dialog === 'retire' && <RetireMachineDialog machine={machine} onClose={close} />}
    </>
  )
}
