import { useState } from 'react'
import { same, type Edit } from '../../../../shared/parameters/edits.ts'
import type { MachineSet, Value } from '../../../../shared/parameters/machine-set.ts'
import type { Parameter } from '../../../../shared/registers/parameter-schema.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Checkbox } from '../../../components/ui/checkbox.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { count } from '../../../lib/format.ts'
import { readTyped, shownValue, valueText } from '../typed-value.ts'
import { editTo } from '../use-typed-value.ts'
import type { ValueAt } from '../value-cells.ts'
import type { Column, TableCells } from '../value-table.ts'

export interface FillDialogProps {
  /** the cell whose value is given to others */
  from: ValueAt
  row: Parameter
  fromKey: string
  set: MachineSet
  columns: readonly Column[]
  cells: TableCells
  /** columns chosen at first */
  chosen: readonly string[]
  onFill: (edits: Edit[]) => void
  onClose: () => void
}

type Line = { column: Column; at: ValueAt } & ({ kind: 'takes'; value: Value; edit: Edit } | { kind: 'has it' } | { kind: 'refused'; why: string })

function lineOf(column: Column, at: ValueAt, { value, parameter: { unit } }: ValueAt): Line {
  // Another firmware line may hold it in another unit.
  const read = readTyped(at.parameter, unit === at.parameter.unit || unit === null ? valueText(value) : `${valueText(value)} ${unit}`)
  if (read.kind === 'refused') return { column, at, kind: 'refused', why: read.message }
  if (same(at.value, read.value)) return { column, at, kind: 'has it' }
  const edit = editTo(at, read.value)
  return edit ? { column, at, kind: 'takes', value: read.value, edit } : { column, at, kind: 'has it' }
}

/** Gives a value to many joints, each as a value of its own; what a joint has already, or can't hold, is said beside it. */
export function FillDialog({ from, row, fromKey, set, columns, cells, chosen, onFill, onClose }: FillDialogProps) {
  const { parameter } = from
  const lines = from.value === undefined ? [] : columns.filter((c) => c.key !== fromKey).flatMap((column): Line[] => {
    const at = cells.at(column, row)
    return at ? [lineOf(column, at, from)] : []
  })
  const takes = lines.filter((l) => l.kind === 'takes')
  const [ticked, setTicked] = useState<ReadonlySet<string>>(() => new Set(chosen))
  const wanted = takes.filter((l) => ticked.has(l.column.key))
  const tick = (keys: readonly string[], on: boolean) => setTicked(new Set(on ? [...ticked, ...keys] : [...ticked].filter((k) => !keys.includes(k))))
  const families = [...new Set(lines.map((l) => l.column.place.family))]
  const joints = takes.filter((l) => l.column.place.kind === 'joint').map((l) => l.column.key)
  return (
    <Dialog
      open
      title={`Fill ${parameter.title.toLowerCase()} ${shownValue(from.value)} ${parameter.unit ?? ''}`.trim()}
      onClose={onClose}
      actions={
        <>
          <Button kind="primary" unavailable={wanted.length === 0 ? 'Choose where it goes.' : null} onClick={() => onFill(wanted.map((l) => l.edit))}>
            Fill {count(wanted.length, 'place')}
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <div className="flex gap-4 text-13">
        <button type="button" className="link" onClick={() => tick(joints, true)}>
          every joint
        </button>
        <button type="button" className="link" onClick={() => setTicked(new Set())}>
          none
        </button>
      </div>
      <div className="max-h-[50vh] overflow-y-auto">
        {families.map((family) => (
          <fieldset key={family} className="border-t border-hairline py-2">
            <legend className="float-left mb-1 w-full text-13 font-medium">{set.families[family].name}</legend>
            <ul className="clear-both grid gap-1">
              {lines
                .filter((l) => l.column.place.family === family)
                .map((line) => (
                  <li key={line.column.key} className="flex items-baseline justify-between gap-4 text-13">
                    {line.kind === 'takes' ? <Checkbox label={line.column.title} checked={ticked.has(line.column.key)} onChange={(on) => tick([line.column.key], on)} /> : <span className="text-ink-2">{line.column.title}</span>}
                    <span className="num text-ink-2">
                      {line.kind === 'takes' ? (
                        <>
                          {shownValue(line.at.value)}
                          <Arrow />
                          <span className="text-brass">{shownValue(line.value)}</span> {line.at.parameter.unit !== parameter.unit && line.at.parameter.unit}
                        </>
                      ) : line.kind === 'has it' ? (
                        'has it'
                      ) : (
                        <span className="text-oxide">{line.why}</span>
                      )}
                    </span>
                  </li>
                ))}
            </ul>
          </fieldset>
        ))}
      </div>
    </Dialog>
  )
}
