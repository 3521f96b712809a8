import { useState } from 'react'
import type { EvidenceView, IdentifiedLetter, IdentifiedValue } from '../../../../shared/contract/evidence.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useUseIdentified } from '../mutations.ts'

export interface OwnDraft {
  key: string
  title: string
}

const numberIn = (to: unknown): number | null => (typeof to === 'number' ? to : typeof to === 'object' && to !== null && 'value' in to ? Number(to.value) : null)

/** Into which draft the values go: a new change, or one's own. */
export function UseDialog({ log, letters, values, T_winding, drafts, onDrafted, onClose }: { log: EvidenceView; letters: IdentifiedLetter[]; values: readonly IdentifiedValue[]; T_winding: number; drafts: readonly OwnDraft[]; onDrafted: (change: string) => void; onClose: () => void }) {
  const use = useUseIdentified(log.machine, log.number)
  const [into, setInto] = useState('new')
  const [title, setTitle] = useState(`${log.jointName}: drive train as measured`)
  const wrong = into === 'new' && title.trim() === '' ? 'A change needs a title.' : null
  const draft = () => {
    if (wrong) return
    use.mutate({ letters, T_winding, ...(into === 'new' ? { title: title.trim() } : { change: into }) }, { onSuccess: ({ change }) => onDrafted(change) })
  }
  return (
    <Dialog
      open
      busy={use.isPending}
      onClose={onClose}
      title="Use these in the drive train"
      actions={
        <>
          <Button kind="primary" pending={use.isPending} onClick={draft}>
            {into === 'new' ? 'Draft it' : 'Write them in'}
          </Button>
          <Button onClick={onClose}>Leave it</Button>
        </>
      }
    >
      <ul className="text-13">
        {values.filter((v) => letters.includes(v.letter)).map((v) => (
          <li key={v.letter} className="flex flex-wrap gap-x-2">
            <span>{v.editWords.split(',')[0]}</span>
            <Num value={numberIn(v.edit?.from)} unit={v.unit} digits={4} />
            <span aria-hidden="true">→</span>
            <Num value={numberIn(v.edit?.to)} unit={v.unit} digits={4} />
          </li>
        ))}
      </ul>
      <p className="text-13 text-ink-2">They are values of the whole family: every joint built alike takes them. Bounds keep their ratio.</p>
      <Select label="Into" value={into} onChange={setInto} options={[{ value: 'new', label: 'a new change' }, ...drafts.map((d) => ({ value: d.key, label: `${d.key}, ${d.title}` }))]} />
      {into === 'new' && <TextField label="Title" value={title} onChange={setTitle} maxLength={120} error={wrong ?? fieldError(use.error, '/title')} />}
      <ProblemPanel problem={use.error} shown={['/title']} />
    </Dialog>
  )
}
