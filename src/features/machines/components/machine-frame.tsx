import type { ReactNode } from 'react'
import type { MachineBoards } from '../../../../shared/contract/boards.ts'
import type { MachineView } from '../../../../shared/contract/machines.ts'
import { Spines } from './spines.tsx'

/** A page inside a machine: the spine of its bus on the left, folded away where there is no room beside. */
export function MachineFrame({ machine, boards, bus, joint, children }: { machine: MachineView; boards?: MachineBoards; bus?: string; joint?: string; children: ReactNode }) {
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-x-10 gap-y-5 lg:grid-cols-[214px_minmax(0,1fr)]">
      <div className="max-lg:hidden">
        <Spines machine={machine} boards={boards} only={bus} selected={joint} />
      </div>
      <details className="lg:hidden">
        <summary className="text-13 text-ink-2">{bus === undefined ? 'buses' : 'bus'} of {machine.name}</summary>
        <div className="mt-3">
          <Spines machine={machine} boards={boards} only={bus} selected={joint} />
        </div>
      </details>
      <div className="min-w-0">{children}</div>
    </div>
  )
}
