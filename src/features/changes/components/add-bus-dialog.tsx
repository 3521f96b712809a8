import { useState } from 'react'
import { toPointer } from '../../../../shared/parameters/paths.ts'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { readTypedQuantity } from '../display-unit.ts'
import { makeKey } from '../make-key.ts'
import type { AddDialogProps } from './add-joint-dialog.tsx'

const fields = [
  { key: 'bitRate', label: 'Bit rate', unit: 'bit/s', low: 1000, high: 3_400_000 },
  { key: 'supply', label: 'Supply', unit: 'V', low: 0, high: Infinity },
  { key: 'pullUp', label: 'Pull-up', unit: 'Ω', low: 0, high: Infinity },
  { key: 'capacitance', label: 'Capacitance', unit: 'F', low: 0, high: Infinity },
] as const
type FieldKey = (typeof fields)[number]['key']

/** A new two-wire bus. */
export function AddBusDialog({ set, onEdit, onClose }: AddDialogProps) {
  const [name, setName] = useState('')
  const [typed, setTyped] = useState<Record<FieldKey, string>>({ bitRate: '400000', supply: '3.3', pullUp: '1.8 kΩ', capacitance: '120 pF' })
  const [pressed, setPressed] = useState(false)
  const key = makeKey(name, Object.keys(set.buses))
  const read = (f: (typeof fields)[number]) => {
    const q = readTypedQuantity(typed[f.key], f.unit === 'bit/s' ? null : f.unit)
    if (q.kind === 'refused') return { error: q.message, value: 0 }
    if (typeof q.value !== 'number' || !(q.value > 0 && q.value >= f.low && q.value <= f.high)) return { error: f.high === Infinity ? 'It must be above 0.' : `It is ${f.low} to ${f.high}.`, value: 0 }
    return { error: null, value: q.value }
  }
  const readings = Object.fromEntries(fields.map((f) => [f.key, read(f)])) as Record<FieldKey, ReturnType<typeof read>>
  const add = () => {
    setPressed(true)
    if (key === '' || fields.some((f) => readings[f.key].error !== null)) return
    onEdit([{ pointer: toPointer(['buses', key]), to: { name: name.trim(), ...Object.fromEntries(fields.map((f) => [f.key, readings[f.key].value])) } }])
    onClose()
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title="Add a bus"
      actions={
        <>
          <Button kind="primary" onClick={add}>
            Add it
          </Button>
          <Button onClick={onClose}>Leave it</Button>
        </>
      }
    >
      <TextField label="Name" value={name} onChange={setName} maxLength={80} help={key ? <>key <span className="num">{key}</span></> : 'as it is called on the machine'} error={pressed && key === '' ? 'A bus needs a name with a letter or digit.' : null} />
      {fields.map((f) => (
        <TextField key={f.key} label={f.label} mono unit={f.unit} value={typed[f.key]} onChange={(v) => setTyped({ ...typed, [f.key]: v })} error={pressed ? readings[f.key].error : null} />
      ))}
    </Dialog>
  )
}
