import { useState } from 'react'
import type { DriveTrain } from '../../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../../shared/parameters/paths.ts'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { letterLines, type LetterLine } from '../drive-train-letters.ts'
import { readTypedQuantity } from '../display-unit.ts'
import { makeKey } from '../make-key.ts'
import type { AddDialogProps } from './add-joint-dialog.tsx'

const NEW = 'new'
const needed = letterLines.filter((l) => l.needed)

/** A new family: its name and a drive train, copied from another family or typed from the data sheets. */
export function AddFamilyDialog({ set, onEdit, onClose, onAdded }: AddDialogProps & { onAdded: (family: string) => void }) {
  const families = Object.entries(set.families)
  const [name, setName] = useState('')
  const [from, setFrom] = useState(families[0]?.[0] ?? NEW)
  const [typed, setTyped] = useState<Record<string, string>>({ encoder: 'output', bits: '16' })
  const [pressed, setPressed] = useState(false)
  const key = makeKey(name, Object.keys(set.families))
  const errors = from === NEW ? Object.fromEntries(needed.map((l) => [l.letter, errorOf(l, typed[l.letter] ?? '')])) : {}
  const add = () => {
    setPressed(true)
    if (key === '' || Object.values(errors).some((e) => e !== null)) return
    const driveTrain = from === NEW ? (Object.fromEntries(needed.map((l) => [l.letter, read(l, typed[l.letter] ?? '')])) as unknown as DriveTrain) : set.families[from].driveTrain
    onEdit([{ pointer: toPointer(['families', key]), to: { name: name.trim(), driveTrain, values: {} } }])
    onAdded(key)
    onClose()
  }
  return (
    <Dialog
      open
      wide={from === NEW}
      onClose={onClose}
      title="Add a family"
      actions={
        <>
          <Button kind="primary" onClick={add}>
            Add it
          </Button>
          <Button onClick={onClose}>Leave it</Button>
        </>
      }
    >
      <TextField label="Name" value={name} onChange={setName} maxLength={80} help={key ? <>key <span className="num">{key}</span></> : 'joints built alike'} error={pressed && key === '' ? 'A family needs a name with a letter or digit.' : null} />
      <Select label="Drive train" value={from} onChange={setFrom} options={[...families.map(([k, f]) => ({ value: k, label: `as the ${f.name} family` })), { value: NEW, label: 'from the data sheets' }]} help="Bounds, ratings and heat are added in the table afterwards." />
      {from === NEW && (
        <div className="grid gap-3 sm:grid-cols-2">
          {needed.map((l) =>
            l.choices ? (
              <Select key={l.letter} label={l.words} value={typed[l.letter] ?? ''} onChange={(v) => setTyped({ ...typed, [l.letter]: v })} options={l.choices.map((c) => ({ value: c, label: c }))} />
            ) : (
              <TextField key={l.letter} label={l.words} mono unit={l.unit ?? ''} value={typed[l.letter] ?? ''} onChange={(v) => setTyped({ ...typed, [l.letter]: v })} error={pressed ? errors[l.letter] : null} />
            ),
          )}
        </div>
      )}
    </Dialog>
  )
}

function read(line: LetterLine, text: string): number | string | null {
  if (line.choices) return text
  const q = readTypedQuantity(text, line.unit)
  return q.kind === 'value' && typeof q.value === 'number' ? q.value : null
}

function errorOf(line: LetterLine, text: string): string | null {
  if (line.choices) return null
  const value = read(line, text)
  if (typeof value !== 'number') return text.trim() === '' ? 'It is needed.' : 'It is no number in this unit.'
  if (value <= 0) return 'It must be above 0.'
  if (line.letter === 'bits' && !(Number.isInteger(value) && value <= 32)) return 'It is a whole number up to 32.'
  return line.letter === 'eta' && value > 1 ? 'It is at most 1.' : null
}
