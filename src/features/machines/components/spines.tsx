import type { MachineView } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { BusSpine } from '../../../components/ui/bus-spine.tsx'

/** A machine's buses as spines; with `only`, that bus alone. Which board sits at a tap is not recorded, so none is drawn as known. */
export function Spines({ machine, only, selected }: { machine: MachineView; only?: string; selected?: string }) {
  const buses = machine.busList.filter((b) => only === undefined || b.key === only)
  return (
    <div className="flex flex-wrap gap-x-[22px] gap-y-6">
      {buses.map((bus) => (
        <BusSpine
          key={bus.key}
          name={bus.settings.name}
          to={paths.bus(machine.key, bus.key)}
          bitRate={bus.settings.bitRate}
          supply={bus.settings.supply}
          pullUp={bus.settings.pullUp}
          selected={selected}
          taps={machine.jointList
            .filter((j) => j.bus === bus.key)
            .map((j) => ({ key: j.key, to: paths.joint(machine.key, j.key), joint: j.name, address: j.address, board: 'unknown', waiting: j.waiting.length > 0 }))}
        />
      ))}
    </div>
  )
}
