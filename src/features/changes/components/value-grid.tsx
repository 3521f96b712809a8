import { useRef, useState } from 'react'
import type { KeyboardEvent } from 'react'
import { byLaw } from '../../../../shared/parameters/laws.ts'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import type { Parameter } from '../../../../shared/registers/parameter-schema.ts'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { EmptyState } from '../../../components/ui/empty-state.tsx'
import type { Showing } from '../scope.ts'
import { jointsOf, ownValuesOf, parameterOfJoint, parametersOfFamily, valueAtPlace, type Place, type Schemas, type ValueAt } from '../value-cells.ts'
import { ValueGridCell } from './value-grid-cell.tsx'
import { ValueInspector } from './value-inspector.tsx'

export interface ValueGridProps {
  set: MachineSet
  base: MachineSet
  schemas: Schemas
  family: string
  /** its column stands out */
  joint: string | null
  showing: Showing
  /** null: read only */
  onEdit: ((edits: Edit[]) => void) | null
}

interface Chosen {
  row: number
  column: number
}

/**
 * All values of a family: parameters in rows by law, the family's value and what each joint ends up with in columns. A grid as in the
 * WAI-ARIA APG: arrows move, Enter or a digit edits, Esc leaves, Delete sets back to what is inherited.
 */
export function ValueGrid({ set, base, schemas, family, joint, showing, onEdit }: ValueGridProps) {
  const [chosen, setChosen] = useState<Chosen>({ row: 0, column: 0 })
  const [editing, setEditing] = useState<string | null>(null)
  const table = useRef<HTMLTableElement>(null)
  const joints = jointsOf(set, family)
  const places: Place[] = [{ kind: 'family', family }, ...joints.map((j): Place => ({ kind: 'joint', joint: j, family }))]
  const cellsOf = (p: Parameter) =>
    places.map((place) => {
      const own = place.kind === 'joint' ? parameterOfJoint(set, place.joint, p.name, schemas) : p
      return own && valueAtPlace(set, base, place, own, schemas)
    })
  const wanted = (p: Parameter, cells: readonly (ValueAt | null)[]) => showing === 'all' || (showing === 'changed' ? cells.some((c) => c?.changed || c?.originChanged) : ownValuesOf(set, family, p.name).length > 0)
  const groups = byLaw(parametersOfFamily(set, family, schemas))
    .map(({ law, things }) => ({ law, rows: things.map((p) => ({ parameter: p, cells: cellsOf(p) })).filter((r) => wanted(r.parameter, r.cells)) }))
    .filter((g) => g.rows.length > 0)
  const rows = groups.flatMap((g) => g.rows)
  const numberOf = new Map(rows.map((r, i) => [r.parameter.name, i]))
  const row = Math.min(chosen.row, rows.length - 1)
  const at = rows[row]?.cells[chosen.column] ?? null

  if (rows.length === 0)
    return showing === 'all' ? (
      <EmptyState title="No values yet">Give the family a joint with a firmware version; its parameters then stand here.</EmptyState>
    ) : (
      <EmptyState title={showing === 'changed' ? 'No value of this family differs from the release' : 'No joint has a value of its own here'}>Show all to see the rest.</EmptyState>
    )

  const focusCell = (r: number, c: number) => {
    setChosen({ row: r, column: c })
    table.current?.querySelector<HTMLElement>(`[data-cell="${r} ${c}"]`)?.focus()
  }
  const moveTo = (r: number, c: number) => focusCell(Math.min(rows.length - 1, Math.max(0, r)), Math.min(places.length - 1, Math.max(0, c)))
  const onKey = (event: KeyboardEvent) => {
    if (event.defaultPrevented || event.ctrlKey || event.metaKey || event.altKey) return
    const [r, c] = [row, chosen.column]
    const next: Record<string, () => void> = {
      ArrowDown: () => moveTo(r + 1, c),
      ArrowUp: () => moveTo(r - 1, c),
      ArrowLeft: () => moveTo(r, c - 1),
      ArrowRight: () => moveTo(r, c + 1),
      Home: () => moveTo(r, 0),
      End: () => moveTo(r, places.length - 1),
      PageDown: () => moveTo(r + 10, c),
      PageUp: () => moveTo(r - 10, c),
    }
    if (editing !== null || !Object.hasOwn(next, event.key)) return
    event.preventDefault()
    next[event.key]()
  }

  return (
    <>
      {at && <ValueInspector key={at.pointer} at={at} set={set} schemas={schemas} onEdit={onEdit} />}
      <div className={`table-frame mt-2 ${joints.length > 6 ? 'overflow-x-auto' : ''}`}>
        <table ref={table} role="grid" aria-label={`values of the ${set.families[family].name} family`} aria-readonly={onEdit === null} className="table table-dense" onKeyDown={onKey}>
          <thead>
            <tr>
              <th scope="col">Parameter</th>
              <th scope="col">Unit</th>
              <th scope="col" className="end">
                Family
              </th>
              {joints.map((j) => (
                <th key={j} scope="col" className={`end ${j === joint ? '!text-ink' : ''}`}>
                  {set.joints[j].name}
                  <span className="block font-normal">
                    <HexAddress address={set.joints[j].address} />
                  </span>
                </th>
              ))}
            </tr>
          </thead>
          {groups.map((g) => (
            <tbody key={g.law}>
              <tr>
                <th scope="rowgroup" colSpan={2 + places.length} className="!border-hairline !pt-3 !text-ink-2">
                  {g.law}
                </th>
              </tr>
              {g.rows.map(({ parameter, cells }) => {
                const r = numberOf.get(parameter.name)!
                return (
                  <tr key={parameter.name}>
                    <td role="rowheader" title={parameter.description || undefined}>
                      {parameter.title}
                    </td>
                    <td className="text-13 text-ink-2">{parameter.unit}</td>
                    {cells.map((cell, c) => (
                      <ValueGridCell
                        key={places[c].kind === 'joint' ? (places[c] as { joint: string }).joint : 'family'}
                        id={`${r} ${c}`}
                        at={cell}
                        label={`${parameter.title}, ${c === 0 ? 'family' : set.joints[joints[c - 1]].name}`}
                        inTabOrder={r === row && c === chosen.column}
                        emphasised={c > 0 && joints[c - 1] === joint}
                        editing={editing === `${r} ${c}`}
                        onChoose={() => setChosen({ row: r, column: c })}
                        onBegin={onEdit ? () => setEditing(`${r} ${c}`) : null}
                        onEnd={(way) => {
                          setEditing(null)
                          moveTo(r + (way === 'down' ? 1 : 0), c + (way === 'right' ? 1 : way === 'left' ? -1 : 0))
                        }}
                        onLeave={() => setEditing((now) => (now === `${r} ${c}` ? null : now))}
                        onEdit={onEdit ?? (() => {})}
                      />
                    ))}
                  </tr>
                )
              })}
            </tbody>
          ))}
        </table>
      </div>
    </>
  )
}
