import type { MachineView } from '../../../../shared/contract/machines.ts'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { LinkButton } from '../../../components/ui/link-button.tsx'
import { paths } from '../../../app/paths.ts'

/** Each address of the machine's buses that two of its joints or devices share. */
export function DoubledAddresses({ machine }: { machine: MachineView }) {
  return machine.busList.flatMap((bus) =>
    bus.doubled.map((address) => (
      <div key={`${bus.key} ${address}`} className="mt-5 flex flex-wrap items-center gap-x-6 gap-y-2 border-y border-oxide py-2">
        <div className="min-w-0 flex-1 basis-60">
          <FindingMark level="block">
            two have the address <HexAddress address={address} /> on {bus.settings.name}
          </FindingMark>
          <p className="text-13">
            {machine.jointList.filter((j) => j.bus === bus.key && j.address === address).map((j) => j.name).join(' and ')} can't be told apart there. Draft a change that gives one of them a free address.
          </p>
        </div>
        <LinkButton small to={paths.bus(machine.key, bus.key)}>
          Open the bus
        </LinkButton>
      </div>
    )),
  )
}
