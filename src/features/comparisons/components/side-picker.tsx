import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import type { ComparedSide } from '../../../../shared/contract/comparisons.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { choicesQuery } from '../queries.ts'
import { machineOfRef, readSideRef, writeSideRef } from '../side-ref.ts'

export interface SidePickerProps {
  /** "From" */
  label: string
  side: string
  machines: readonly { key: string; name: string }[]
  /** the side as it was read, which knows the machine of a read-back */
  shown: ComparedSide | undefined
  onChange: (side: string) => void
}

const kindWords: Record<string, string> = { release: 'a release', change: 'a change', revision: 'a revision', 'read-back': 'a read-back' }

/** Chooses one of two sides: the machine, what kind of thing, which one, and perhaps one joint of it. */
export function SidePicker({ label, side, machines, shown, onChange }: SidePickerProps) {
  const now = readSideRef(side)
  const [asked, setAsked] = useState<{ machine?: string; kind?: string }>({})
  const machine = asked.machine ?? machineOfRef(side) ?? shown?.machine ?? machines[0]?.key ?? ''
  const choices = useQuery({ ...choicesQuery(machine), enabled: machine !== '' })
  const kinds = choices.data?.kinds ?? []
  const kind = asked.kind ?? (now.kind || 'release')
  const of = kinds.find((k) => k.kind === kind)
  const choose = (whole: string) => {
    setAsked({})
    onChange(writeSideRef(whole, of?.narrows ? now.joint : ''))
  }
  return (
    <fieldset className="grid gap-2 border border-hairline bg-sheet px-4 pt-2 pb-4">
      <legend className="px-1 text-13 font-medium">{label}</legend>
      <div className="grid grid-cols-2 gap-3">
        <Select label="Machine" value={machine} onChange={(key) => setAsked({ machine: key, kind })} options={machines.map((m) => ({ value: m.key, label: m.name }))} />
        <Select label="What" value={kind} onChange={(next) => setAsked({ machine, kind: next })} options={kinds.map((k) => ({ value: k.kind, label: kindWords[k.kind] ?? k.label, disabled: k.choices.length === 0 }))} />
      </div>
      <Select label="Which" value={now.kind === kind && machine === (machineOfRef(side) ?? shown?.machine) ? now.whole : ''} onChange={choose} placeholder={of && of.choices.length === 0 ? 'there is none' : 'choose one'} options={(of?.choices ?? []).map((c) => ({ value: c.ref, label: `${c.label}: ${c.note}` }))} />
      {of?.narrows && now.kind === kind && <Select label="Joint" value={now.joint || '*'} onChange={(joint) => onChange(writeSideRef(now.whole, joint === '*' ? '' : joint))} options={[{ value: '*', label: 'every joint' }, ...(choices.data?.joints ?? []).map((j) => ({ value: j.key, label: j.name }))]} />}
      <ProblemPanel problem={choices.error} />
    </fieldset>
  )
}
