import { useSuspenseQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useNavigate, useParams } from 'react-router'
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
import { DescribeMachineDialog } from '../features/machines/components/describe-machine-dialog.tsx'
import { DoubledAddresses } from '../features/machines/components/doubled-addresses.tsx'
import { DraftChangeDialog } from '../features/machines/components/draft-change-dialog.tsx'
import { FamilyList } from '../features/machines/components/family-list.tsx'
import { JointTable } from '../features/machines/components/joint-table.tsx'
import { CurrentRelease } from '../features/machines/components/release-shown.tsx'
import { RetireMachineDialog } from '../features/machines/components/retire-machine-dialog.tsx'
import { Spines } from '../features/machines/components/spines.tsx'
import { WaitingChanges } from '../features/machines/components/waiting-changes.tsx'
import { machineQuery } from '../features/machines/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) => queryClient.ensureQueryData(machineQuery(params.machine!))

export function Component() {
  const machine = useSuspenseQuery(machineQuery(useParams().machine!)).data
  const navigate = useNavigate()
  const [dialog, setDialog] = useState<'draft' | 'describe' | 'retire' | null>(null)
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
        aside={<CurrentRelease machine={machine.key} current={machine.currentRelease} shown={machine.shown} />}
        actions={
          <>
            <Button kind="primary" unavailable={refusal(machine.may.draftChange)} onClick={() => setDialog('draft')}>
              Draft a change…
            </Button>
            {machine.may.describe.allowed && <Button onClick={() => setDialog('describe')}>Describe…</Button>}
            {machine.may.retire.allowed && <Button kind="danger" onClick={() => setDialog('retire')}>Retire…</Button>}
          </>
        }
      >
        {size}
      </PageHead>
      <div className={`grid gap-x-10 gap-y-8 ${machine.busList.length === 0 ? '' : machine.busList.length === 1 ? 'lg:grid-cols-[214px_minmax(0,1fr)]' : machine.busList.length === 2 ? 'lg:grid-cols-[450px_minmax(0,1fr)]' : 'lg:grid-cols-[450px_minmax(0,1fr)] xl:grid-cols-[686px_minmax(0,1fr)]'}`}>
        {machine.busList.length > 0 && (
          <section aria-label="buses">
            <Spines machine={machine} />
            <DoubledAddresses machine={machine} />
          </section>
        )}
        <div className="grid min-w-0 content-start gap-8">
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
            <>
              <section aria-labelledby="joints">
                <SectionHeading id="joints" actions={<FilterField label="filter joints" value={filter} onChange={setFilter} />}>
                  Joints
                </SectionHeading>
                <JointTable machine={machine.key} joints={joints} />
              </section>
              <section aria-labelledby="families">
                <SectionHeading id="families">Families</SectionHeading>
                <FamilyList machine={machine} />
              </section>
            </>
          )}
          <section aria-labelledby="acts">
            <SectionHeading id="acts" actions={<TextLink to={paths.ledger({ machine: machine.key })}>ledger</TextLink>}>
              Last acts
            </SectionHeading>
            {machine.lastActs.length > 0 ? <Acts entries={machine.lastActs} /> : <p className="py-2 text-13 text-ink-2">Nothing was done here yet.</p>}
          </section>
        </div>
      </div>
      {dialog === 'draft' && <DraftChangeDialog machine={machine.key} machineName={machine.name} base={machine.shown?.version ?? null} onClose={close} onDrafted={(key) => void navigate(paths.change(key))} />}
      {dialog === 'describe' && <DescribeMachineDialog machine={machine} onClose={close} />}
      {dialog === 'retire' && <RetireMachineDialog machine={machine} onClose={close} />}
    </>
  )
}
