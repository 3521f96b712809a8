import type { MachineBoards } from '../../../../shared/contract/boards.ts'
import type { MachineView } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { BusSpine } from '../../../components/ui/bus-spine.tsx'

export interface SpinesProps {
  machine: MachineView
  /** What is known of the boards; until it is read every tap is drawn as unknown. */
  boards?: MachineBoards
  /** That bus alone. */
  only?: string
  selected?: string
}

/** A machine's buses as spines, each tap with the state of its board. */
export function Spines({ machine, boards, only, selected }: SpinesProps) {
  const states = new Map(boards?.joints.map((j) => [j.joint, j.state]))
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
            .map((j) => ({ key: j.key, to: paths.joint(machine.key, j.key), joint: j.name, address: j.address, board: states.get(j.key) ?? 'unknown', waiting: j.waiting.length > 0 }))}
        />
      ))}
    </div>
  )
}
