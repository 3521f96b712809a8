import { useQueryClient } from '@tanstack/react-query'
import { useState } from 'react'
import type { ChangeView } from '../../shared/contract/changes.ts'
import { Button } from '../components/ui/button.tsx'
import { acceptChange } from '../features/changes/queries.ts'
import { CarryOverDialog } from '../features/firmware/components/carry-over-dialog.tsx'
import { BenchImageDialog } from '../features/releases/components/bench-image-dialog.tsx'

export interface ChangeToolsProps {
  /** the change as saved */
  change: ChangeView
  /** joints that the page shows: what opens begins with them */
  joints: readonly string[]
  /** why neither can be begun now, such as values on their way; null when they can */
  unavailable: string | null
}

/** The family that is shown, or the one joint. */
function startOf({ joints }: ChangeView['set'], shown: readonly string[]): string | undefined {
  const [first] = shown
  if (first === undefined || !joints[first]) return undefined
  return shown.length === 1 ? `joint:${first}` : `family:${joints[first].family}`
}

/** What its writers can do with a change besides editing its values: move joints to another firmware version, try it on one board. */
export function ChangeTools({ change, joints, unavailable }: ChangeToolsProps) {
  const client = useQueryClient()
  const [open, setOpen] = useState<'carry' | 'bench' | null>(null)
  const close = () => setOpen(null)
  if (!change.may.takeBenchImage.allowed || Object.keys(change.set.joints).length === 0) return null
  return (
    <section className="mt-4 border-t border-hairline pt-3 text-13" aria-label="with this change">
      <div className="flex flex-wrap gap-2">
        {change.may.edit.allowed && (
          <Button small unavailable={unavailable} onClick={() => setOpen('carry')}>
            Carry over to another firmware…
          </Button>
        )}
        <Button small unavailable={unavailable} onClick={() => setOpen('bench')}>
          Bench image…
        </Button>
      </div>
      {open === 'carry' && (
        <CarryOverDialog
          change={change}
          start={startOf(change.set, joints)}
          onClose={close}
          onCarried={(view) => {
            void acceptChange(client, view)
            close()
          }}
        />
      )}
      {open === 'bench' && <BenchImageDialog change={change} joint={joints[0]} onClose={close} />}
    </section>
  )
}
