import { useState } from 'react'
import { useNavigate } from 'react-router'
import type { MachineView } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { refusal } from '../../../components/layout/refused.ts'
import { Button } from '../../../components/ui/button.tsx'
import { DraftChangeDialog } from './draft-change-dialog.tsx'

/** Begins a change of the machine and goes to it. */
export function DraftChangeButton({ machine }: { machine: MachineView }) {
  const [open, setOpen] = useState(false)
  const navigate = useNavigate()
  return (
    <>
      <Button kind="primary" unavailable={refusal(machine.may.draftChange)} onClick={() => setOpen(true)}>
        Draft a change…
      </Button>
      {open && <DraftChangeDialog machine={machine.key} machineName={machine.name} base={machine.shown?.version ?? null} onClose={() => setOpen(false)} onDrafted={(key) => void navigate(paths.change(key))} />}
    </>
  )
}
