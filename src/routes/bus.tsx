import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { KeyValueList } from '../components/ui/key-value-list.tsx'
import { Num } from '../components/ui/num.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { AddressGrid } from '../features/machines/components/address-grid.tsx'
import { BusAddresses } from '../features/machines/components/bus-addresses.tsx'
import { BusLoad } from '../features/machines/components/bus-load.tsx'
import { BusWhatIf } from '../features/machines/components/bus-what-if.tsx'
import { DraftChangeButton } from '../features/machines/components/draft-change-button.tsx'
import { machineBoardsQuery } from '../features/boards/queries.ts'
import { MachineFrame } from '../features/machines/components/machine-frame.tsx'
import { PullUp } from '../features/machines/components/pull-up.tsx'
import { FromRelease } from '../features/machines/components/release-shown.tsx'
import { TapTable } from '../features/machines/components/tap-table.tsx'
import { busQuery, machineQuery } from '../features/machines/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) =>
  Promise.all([queryClient.ensureQueryData(machineQuery(params.machine!)), queryClient.ensureQueryData(busQuery(params.machine!, params.bus!))])

export function Component() {
  const params = useParams()
  const machine = useSuspenseQuery(machineQuery(params.machine!)).data
  const boards = useQuery(machineBoardsQuery(params.machine!)).data
  const bus = useSuspenseQuery(busQuery(params.machine!, params.bus!)).data
  const { settings } = bus
  return (
    <>
      <PageHead
        kicker={
          <>
              <TextLink to={paths.machine(bus.machine)}>{bus.machineName}</TextLink>, bus
          </>
        }
        title={settings.name}
        documentTitle={`bus ${settings.name}, ${bus.machineName}`}
        aside={
          <KeyValueList
            entries={[
              { key: 'bit rate', value: <Num value={settings.bitRate} unit="bit/s" /> },
              { key: 'supply', value: <Num value={settings.supply} unit="V" digits={2} /> },
              { key: 'pull-up', value: <Num value={settings.pullUp} unit="Ω" /> },
              { key: 'capacitance', value: <Num value={settings.capacitance} unit="F" /> },
            ]}
          />
        }
        actions={
          <>
            <div className="text-13 text-ink-2">
              as in release <FromRelease machine={bus.machine} shown={bus.shown} />
            </div>
            <DraftChangeButton machine={machine} />
          </>
        }
      >
        {count(bus.taps.length, 'board or device', 'boards and devices')}, {count(bus.free, 'free address', 'free addresses')}
        {settings.pollingRate !== undefined && <>, each board read <Num value={settings.pollingRate} unit="Hz" /></>}
      </PageHead>
      <MachineFrame machine={machine} boards={boards} bus={bus.key}>
        <section aria-labelledby="grid" className="mb-8">
          <SectionHeading id="grid" className="mb-2">Addresses</SectionHeading>
          <AddressGrid bus={bus} />
          <BusAddresses bus={bus} />
        </section>
        <div className="mb-8 grid gap-x-10 gap-y-6 sm:grid-cols-2">
          <section aria-labelledby="load">
            <SectionHeading id="load">Load</SectionHeading>
            <BusLoad bus={bus} settings={settings} />
          </section>
          <section aria-labelledby="pull-up">
            <SectionHeading id="pull-up">Pull-up</SectionHeading>
            <PullUp settings={settings} />
          </section>
        </div>
        <BusWhatIf key={bus.key} bus={bus} />
        <section aria-labelledby="taps">
          <SectionHeading id="taps">What answers</SectionHeading>
          <TapTable bus={bus} />
        </section>
      </MachineFrame>
    </>
  )
}
