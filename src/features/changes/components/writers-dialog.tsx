import { useState } from 'react'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Select } from '../../../components/ui/select.tsx'

export interface WritersDialogProps {
  writers: readonly string[]
  /** people who may be invited */
  people: readonly { id: number; name: string }[]
  onInvite: (person: number) => void
  onClose: () => void
  pending: boolean
  problem: unknown
}

/** Lets somebody else write in the draft; whoever does signs nothing of it. */
export function WritersDialog({ writers, people, onInvite, onClose, pending, problem }: WritersDialogProps) {
  const others = people.filter((p) => !writers.includes(p.name))
  const [chosen, setChosen] = useState('')
  return (
    <Dialog
      open
      busy={pending}
      onClose={onClose}
      title="Invite a writer"
      actions={
        <>
          <Button kind="primary" pending={pending} unavailable={chosen === '' ? 'Choose a person first.' : null} onClick={() => onInvite(Number(chosen))}>
            Invite
          </Button>
          <Button onClick={onClose}>Leave it</Button>
        </>
      }
    >
      <p className="text-13 text-ink-2">Whoever is invited writes in this change as its author does, and from then on signs nothing of it.</p>
      <p className="text-13">Writing now: {writers.join(', ')}.</p>
      {others.length > 0 ? <Select label="Person" placeholder="choose" value={chosen} onChange={setChosen} options={others.map((p) => ({ value: String(p.id), label: p.name }))} /> : <p className="text-13 text-ink-2">Nobody else here drafts changes.</p>}
      <ProblemPanel problem={problem} />
    </Dialog>
  )
}
