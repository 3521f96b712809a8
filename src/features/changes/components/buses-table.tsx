import type { Edit } from '../../../../shared/parameters/edits.ts'
import { same } from '../../../../shared/parameters/edits.ts'
import type { BusSettings, MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../../shared/parameters/paths.ts'
import { Button } from '../../../components/ui/button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { PlainInput } from './plain-input.tsx'
import { QuantityInput } from './quantity-input.tsx'

export interface BusesTableProps {
  set: MachineSet
  base: MachineSet
  onEdit: ((edits: Edit[]) => void) | null
  onAdd: () => void
}

const figures = [
  { field: 'bitRate', head: 'Bit rate', unit: 'bit/s', needed: true },
  { field: 'supply', head: 'Supply', unit: 'V', needed: true },
  { field: 'pullUp', head: 'Pull-up', unit: 'Ω', needed: true },
  { field: 'capacitance', head: 'Capacitance', unit: 'F', needed: true },
  { field: 'pollingRate', head: 'Polling', unit: 'Hz', needed: false },
  { field: 'bytesPerTransaction', head: 'Bytes a poll', unit: null, needed: false },
] as const satisfies readonly { field: keyof BusSettings; head: string; unit: string | null; needed: boolean }[]

/** The buses of the machine: what the check of addresses and bus load goes by. */
export function BusesTable({ set, base, onEdit, onAdd }: BusesTableProps) {
  const used = new Set(Object.values(set.joints).map((j) => j.bus))
  const put = (bus: string, field: keyof BusSettings, to: unknown) => {
    const from = set.buses[bus][field]
    if (onEdit && !same(from, to)) onEdit([{ pointer: toPointer(['buses', bus, field]), ...(from === undefined ? {} : { from }), ...(to === undefined ? {} : { to }) }])
  }
  return (
    <section aria-label="buses">
      <SectionHeading actions={onEdit && <Button small onClick={onAdd}>Add a bus</Button>}>Buses</SectionHeading>
      <div className="table-frame mt-2">
        <table className="table table-dense">
          <thead>
            <tr>
              <th scope="col">Bus</th>
              {figures.map((f) => (
                <th key={f.field} scope="col" className="end">
                  {f.head}
                  {f.unit && <span className="unit block font-normal">{f.field === 'capacitance' ? 'pF' : f.unit}</span>}
                </th>
              ))}
              <th scope="col">
                <span className="sr-only">acts</span>
              </th>
            </tr>
          </thead>
          <tbody>
            {Object.entries(set.buses).map(([key, bus]) => {
              const before = base.buses[key] as BusSettings | undefined
              return (
                <tr key={key}>
                  <td role="rowheader" className="font-medium">
                    <PlainInput label={`name of the bus ${bus.name}`} value={bus.name} onSettle={onEdit && ((v) => v !== '' && put(key, 'name', v))} />
                  </td>
                  {figures.map((f) => (
                    <td key={f.field} className="end">
                      <QuantityInput
                        label={`${f.head.toLowerCase()} of ${bus.name}`}
                        value={bus[f.field]}
                        unit={f.unit}
                        shownIn={f.field === 'capacitance' ? 'pF' : f.unit}
                        changed={before !== undefined && !same(before[f.field], bus[f.field])}
                        mayBeEmpty={!f.needed}
                        onSettle={onEdit && ((v) => (v !== undefined || !f.needed) && put(key, f.field, v))}
                      />
                    </td>
                  ))}
                  <td className="end">
                    {onEdit && !used.has(key) && (
                      <button type="button" className="link text-13" onClick={() => onEdit([{ pointer: toPointer(['buses', key]), from: bus }])}>
                        remove<span className="sr-only"> the bus {bus.name}</span>
                      </button>
                    )}
                  </td>
                </tr>
              )
            })}
            {Object.keys(set.buses).length === 0 && (
              <tr>
                <td colSpan={8} className="text-ink-2">
                  No bus yet: a machine begins with one.
                </td>
              </tr>
            )}
          </tbody>
        </table>
      </div>
    </section>
  )
}
