import { useState } from 'react'
import type { JointCheck } from '../../../../shared/contract/checks.ts'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import { Button } from '../../../components/ui/button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { RetuneDialog } from './retune-dialog.tsx'
import { StartingValuesDialog } from './starting-values-dialog.tsx'

export interface ProposalsProps {
  change: string
  revision: number
  joint: JointCheck
  nameOf: (joint: string) => string
  /** why none can be asked for now; null: one can */
  unavailable: string | null
  /** what is taken goes into the draft as an ordinary edit, with its way back */
  onApply: (edits: readonly Edit[]) => void
}

/** Gains proposed beside the editor, from a dialog each. */
export function Proposals({ change, revision, joint, nameOf, unavailable, onApply }: ProposalsProps) {
  const [open, setOpen] = useState<'starting values' | 'retune' | null>(null)
  const close = () => setOpen(null)
  const dialog = {
    change, revision, joint, nameOf, pending: false, problem: null, onClose: close,
    onApply: (edits: readonly Edit[]) => {
      close()
      onApply(edits)
    },
  }
  return (
    <section className="mt-4">
      <SectionHeading level={3} aux={nameOf(joint.joint)}>
        Gains proposed
      </SectionHeading>
      <div className="mt-2 flex flex-wrap gap-2">
        <Button small unavailable={unavailable} onClick={() => setOpen('starting values')}>
          Starting values
        </Button>
        <Button small unavailable={unavailable} onClick={() => setOpen('retune')}>
          Robust retune
        </Button>
      </div>
      {open === 'starting values' && <StartingValuesDialog {...dialog} />}
      {open === 'retune' && <RetuneDialog {...dialog} />}
    </section>
  )
}
