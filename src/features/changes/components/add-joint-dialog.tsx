import { useState } from 'react'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../../shared/parameters/paths.ts'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { formatHex } from '../../../lib/format.ts'
import { freeAddress, makeKey } from '../make-key.ts'
import { readAddress } from './address-input.tsx'

export interface AddDialogProps {
  set: MachineSet
  onEdit: (edits: Edit[]) => void
  onClose: () => void
}

/** A new joint: name, family, bus, address, firmware version. Values come from the family until it has its own. */
export function AddJointDialog({ set, onEdit, onClose, family: begun, firmware, onAdded }: AddDialogProps & { family: string | null; firmware: readonly string[]; onAdded: (joint: string) => void }) {
  const buses = Object.keys(set.buses)
  const families = Object.keys(set.families)
  const alike = Object.values(set.joints).find((j) => j.family === begun)
  const [name, setName] = useState('')
  const [family, setFamily] = useState(begun ?? families[0] ?? '')
  const [bus, setBus] = useState(alike?.bus ?? buses[0] ?? '')
  const [typed, setTyped] = useState<string | null>(null)
  const [version, setVersion] = useState(alike?.firmware ?? firmware[0] ?? '')
  const [pressed, setPressed] = useState(false)

  const taken = [...Object.values(set.joints).filter((j) => j.bus === bus).map((j) => ({ address: j.address, name: j.name })), ...(set.buses[bus]?.otherDevices ?? [])]
  const free = freeAddress(taken.map((t) => t.address))
  const text = typed ?? (free === null ? '' : formatHex(free))
  const address = readAddress(text)
  const doubled = taken.find((t) => t.address === address)
  const key = makeKey(name, Object.keys(set.joints))
  const missing = buses.length === 0 ? 'Add a bus first.' : families.length === 0 ? 'Add a family first.' : firmware.length === 0 && version === '' ? 'Publish a firmware version first.' : null
  const add = () => {
    setPressed(true)
    if (missing || key === '' || address === null || doubled) return
    onEdit([{ pointer: toPointer(['joints', key]), to: { name: name.trim(), family, bus, address, firmware: version, values: {} } }])
    onAdded(key)
    onClose()
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title="Add a joint"
      actions={
        <>
          <Button kind="primary" unavailable={missing} onClick={add}>
            Add it
          </Button>
          <Button onClick={onClose}>Leave it</Button>
        </>
      }
    >
      <TextField label="Name" value={name} onChange={setName} maxLength={80} help={key ? <>key <span className="num">{key}</span></> : 'as it is called at the bench'} error={pressed && key === '' ? 'A joint needs a name with a letter or digit.' : null} />
      <Select label="Family" value={family} onChange={setFamily} options={families.map((f) => ({ value: f, label: set.families[f].name }))} />
      <Select label="Bus" value={bus} onChange={setBus} options={buses.map((b) => ({ value: b, label: set.buses[b].name }))} />
      <TextField
        label="Address"
        mono
        width={120}
        value={text}
        onChange={setTyped}
        help={free === null ? 'The bus is full.' : <>lowest free one <span className="num">{formatHex(free)}</span></>}
        error={address === null ? (pressed || typed !== null ? 'An address is 0x00 to 0x7F.' : null) : doubled ? `${doubled.name} answers there already.` : null}
      />
      <Select label="Firmware" value={version} onChange={setVersion} options={[...new Set([version, ...firmware])].filter(Boolean).map((v) => ({ value: v, label: v }))} />
    </Dialog>
  )
}
