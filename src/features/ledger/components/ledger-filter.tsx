import { Select } from '../../../components/ui/select.tsx'

export interface LedgerFilterFieldsProps {
  act: string
  machine: string
  person: string
  onAct: (act: string) => void
  onMachine: (machine: string) => void
  onPerson: (person: string) => void
  acts: readonly string[]
  machines: readonly { key: string; name: string }[]
  people: readonly string[]
}

const ALL = '*'
/** A value that is filtered by stays in the list, whether the answer names it or not. */
const withAll = (value: string, words: string, options: readonly { value: string; label: string }[]) => [
  { value: ALL, label: words },
  ...options,
  ...(value !== '' && !options.some((o) => o.value === value) ? [{ value, label: value }] : []),
]

export function LedgerFilterFields({ act, machine, person, onAct, onMachine, onPerson, acts, machines, people }: LedgerFilterFieldsProps) {
  const field = (label: string, value: string, onChange: (value: string) => void, words: string, options: readonly { value: string; label: string }[]) => (
    <Select label={label} className="min-w-[9rem] flex-1 sm:max-w-[14rem]" value={value || ALL} onChange={(v: string) => onChange(v === ALL ? '' : v)} options={withAll(value, words, options)} />
  )
  return (
    <div className="mb-4 flex flex-wrap gap-3">
      {field('Machine', machine, onMachine, 'all', machines.map((m) => ({ value: m.key, label: m.name })))}
      {field('Act', act, onAct, 'all', acts.map((a) => ({ value: a, label: a })))}
      {field('Person', person, onPerson, 'all', people.map((p) => ({ value: p, label: p })))}
    </div>
  )
}
