import type { MachineView } from '../../../../shared/contract/machines.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { ConfirmByName } from '../../../components/ui/confirm-by-name.tsx'
import { useRetireMachine } from '../mutations.ts'

export function RetireMachineDialog({ machine, onClose }: { machine: Pick<MachineView, 'key' | 'name'>; onClose: () => void }) {
  const retire = useRetireMachine(machine.key)
  return (
    <ConfirmByName
      open
      onClose={onClose}
      title={`Retire ${machine.name}`}
      name={machine.name}
      noun="machine"
      act="Retire"
      pending={retire.isPending}
      onConfirm={() => retire.mutate(machine.name, { onSuccess: onClose })}
    >
      <p>No change can be drafted on it any more. Its releases, images and ledger stay readable.</p>
      <ProblemPanel problem={retire.error} />
    </ConfirmByName>
  )
}
