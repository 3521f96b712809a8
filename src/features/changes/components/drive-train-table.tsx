import { useState } from 'react'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import { same } from '../../../../shared/parameters/edits.ts'
import type { DriveTrain, MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../../shared/parameters/paths.ts'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { letterGroups, partOf, toleranceOf, type Filled, type LetterLine, withPart } from '../drive-train-letters.ts'
import { displayUnit, inUnit } from '../display-unit.ts'
import { LetterSymbol } from './letter-symbol.tsx'
import { formatFixed } from '../../../lib/format.ts'
import { shownValue } from '../typed-value.ts'
import { QuantityInput } from './quantity-input.tsx'

export interface DriveTrainTableProps {
  set: MachineSet
  base: MachineSet
  family: string
  onEdit: ((edits: Edit[]) => void) | null
}

/** The physical model of a family: every letter with value, bounds and what the base release had. Optional ones are added when they are known. */
export function DriveTrainTable({ set, base, family, onEdit }: DriveTrainTableProps) {
  const { driveTrain, name } = set.families[family]
  const before = base.families[family]?.driveTrain
  const pointerOf = (line: LetterLine) => toPointer(['families', family, 'driveTrain', line.letter])
  const put = (line: LetterLine, to: Filled | undefined) => {
    const from = driveTrain[line.letter]
    if (onEdit && !same(from, to)) onEdit([{ pointer: pointerOf(line), ...(from === undefined ? {} : { from }), ...(to === undefined ? {} : { to }) }])
  }
  return (
    <section id="drive-train" aria-label={`drive train of the ${name} family`} className="scroll-mt-4">
      <SectionHeading aux="typed with any unit; the bounds are what the tolerance sweep walks">Drive train of the {name} family</SectionHeading>
      <div className="table-frame mt-2">
        <table className="table table-dense">
          <thead>
            <tr>
              <th scope="col">Letter</th>
              <th scope="col">What it is</th>
              <th scope="col">Unit</th>
              <th scope="col" className="end">Value</th>
              <th scope="col" className="end">Low</th>
              <th scope="col" className="end">High</th>
              <th scope="col" className="end">Tolerance</th>
              <th scope="col" className="end">Released</th>
            </tr>
          </thead>
          {letterGroups.map((group) => {
            const held = group.lines.filter((l) => driveTrain[l.letter] !== undefined || (before && before[l.letter] !== undefined))
            const open = group.lines.filter((l) => !held.includes(l))
            return (
              <tbody key={group.title}>
                <tr>
                  <th scope="rowgroup" colSpan={8} className="!border-hairline !pt-3">
                    {group.title}
                  </th>
                </tr>
                {held.map((line) => (
                  <LetterRow key={line.letter} line={line} driveTrain={driveTrain} before={before} onPut={onEdit && ((to) => put(line, to))} />
                ))}
                {onEdit && open.length > 0 && <AddLetter lines={open} onAdd={(line, value) => put(line, value)} />}
              </tbody>
            )
          })}
        </table>
      </div>
    </section>
  )
}

function LetterRow({ line, driveTrain, before, onPut }: { line: LetterLine; driveTrain: DriveTrain; before: DriveTrain | undefined; onPut: ((to: Filled | undefined) => void) | null }) {
  const stored = driveTrain[line.letter]
  const altered = before !== undefined && !same(stored, before[line.letter])
  const tolerance = toleranceOf(stored)
  const nominal = partOf(stored ?? before?.[line.letter], 'value')
  const unit = displayUnit(line.unit, typeof nominal === 'number' ? nominal : undefined)
  const released = partOf(before?.[line.letter], 'value')
  const part = (p: 'value' | 'low' | 'high', label: string) => (
    <QuantityInput
      label={`${line.words}, ${label}`}
      value={partOf(stored, p)}
      unit={line.unit}
      shownIn={unit}
      choices={line.choices}
      changed={altered && before !== undefined && partOf(before[line.letter], p) !== partOf(stored, p)}
      mayBeEmpty={p !== 'value' || !line.needed}
      onSettle={onPut && ((v) => onPut(typeof v === 'string' ? (v as Filled) : withPart(stored, p, v)))}
    />
  )
  return (
    <tr>
      <td role="rowheader">
        <LetterSymbol line={line} />
      </td>
      <td className="text-13 text-ink-2">{line.words}</td>
      <td className="text-13 text-ink-2">{unit}</td>
      <td className="end">{part('value', 'value')}</td>
      <td className="end">{line.bounded && part('low', 'low')}</td>
      <td className="end">{line.bounded && part('high', 'high')}</td>
      <td className="end num text-13 text-ink-2">{tolerance && `${formatFixed(tolerance.low, 0, { plus: true })} to ${formatFixed(tolerance.high, 0, { plus: true })} %`}</td>
      <td className="end num text-13">{altered && (released === undefined ? 'none' : shownValue(typeof released === 'number' ? inUnit(released, line.unit, unit) : released))}</td>
    </tr>
  )
}

function AddLetter({ lines, onAdd }: { lines: readonly LetterLine[]; onAdd: (line: LetterLine, value: Filled) => void }) {
  const [chosen, setChosen] = useState<LetterLine | null>(null)
  return (
    <tr>
      <td colSpan={2}>
        <select aria-label="add a letter" className="rounded border border-hairline bg-sheet px-1 text-13 text-ink-2" value={chosen?.letter ?? ''} onChange={(e) => setChosen(lines.find((l) => l.letter === e.target.value) ?? null)}>
          <option value="">add…</option>
          {lines.map((l) => (
            <option key={l.letter} value={l.letter}>
              {l.symbol}
              {l.sub ? ` ${l.sub}` : ''}, {l.words}
            </option>
          ))}
        </select>
      </td>
      <td className="text-13 text-ink-2">{chosen?.unit}</td>
      <td className="end">
        {chosen && (
          <QuantityInput
            key={chosen.letter}
            label={`${chosen.words}, value`}
            value={undefined}
            unit={chosen.unit}
            changed={false}
            mayBeEmpty
            autoFocus
            onSettle={(v) => {
              if (v !== undefined) onAdd(chosen, v as Filled)
              setChosen(null)
            }}
          />
        )}
      </td>
      <td colSpan={4} />
    </tr>
  )
}
