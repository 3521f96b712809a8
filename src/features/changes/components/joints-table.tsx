import type { Edit } from '../../../../shared/parameters/edits.ts'
import { same } from '../../../../shared/parameters/edits.ts'
import type { JointSettings, MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../../shared/parameters/paths.ts'
import { Button } from '../../../components/ui/button.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { formatHex } from '../../../lib/format.ts'
import { jointsOf } from '../value-cells.ts'
import { AddressInput } from './address-input.tsx'
import { PlainInput } from './plain-input.tsx'

export interface JointsTableProps {
  set: MachineSet
  base: MachineSet
  family: string
  /** firmware versions a joint may be moved to, "hinge 2.1.0" */
  firmware: readonly string[]
  onEdit: ((edits: Edit[]) => void) | null
  onAdd: () => void
}

/** Where each joint of a family sits and what runs on it: bus, address, firmware version, board of its bound values. */
export function JointsTable({ set, base, family, firmware, onEdit, onAdd }: JointsTableProps) {
  const joints = jointsOf(set, family)
  return (
    <section aria-label="joints of the family">
      <SectionHeading actions={onEdit && <Button small onClick={onAdd}>Add a joint</Button>}>Joints</SectionHeading>
      <div className="table-frame mt-2">
        <table className="table table-dense">
          <thead>
            <tr>
              <th scope="col">Joint</th>
              <th scope="col">Bus</th>
              <th scope="col">Address</th>
              <th scope="col">Firmware</th>
              <th scope="col">Board of the bound values</th>
              <th scope="col">
                <span className="sr-only">acts</span>
              </th>
            </tr>
          </thead>
          <tbody>
            {joints.map((key) => (
              <JointRow key={key} joint={key} set={set} before={base.joints[key]} firmware={firmware} onEdit={onEdit} />
            ))}
            {joints.length === 0 && (
              <tr>
                <td colSpan={6} className="text-ink-2">
                  No joint belongs to this family.
                </td>
              </tr>
            )}
          </tbody>
        </table>
      </div>
    </section>
  )
}

function JointRow({ joint, set, before, firmware, onEdit }: { joint: string; set: MachineSet; before: JointSettings | undefined; firmware: readonly string[]; onEdit: JointsTableProps['onEdit'] }) {
  const settings = set.joints[joint]
  const put = <F extends keyof JointSettings>(field: F, to: JointSettings[F] | undefined) => {
    const from = settings[field]
    if (onEdit && !same(from, to)) onEdit([{ pointer: toPointer(['joints', joint, field]), ...(from === undefined ? {} : { from }), ...(to === undefined ? {} : { to }) }])
  }
  const altered = (field: keyof JointSettings) => before !== undefined && !same(before[field], settings[field])
  const was = (field: keyof JointSettings, words = String(before?.[field] ?? 'none')) => (altered(field) ? <span className="block text-12 text-ink-2">was {words}</span> : null)
  const tone = (field: keyof JointSettings) => (altered(field) ? 'font-medium text-brass' : '')
  const others = Object.entries(set.joints).filter(([k, j]) => k !== joint && j.bus === settings.bus)
  const versions = firmware.includes(settings.firmware) ? firmware : [settings.firmware, ...firmware]
  return (
    <tr>
      <td role="rowheader" className="font-medium">
        <PlainInput label={`name of ${settings.name}`} value={settings.name} className={tone('name')} onSettle={onEdit && ((v) => v !== '' && put('name', v))} />
        <span className="block text-12 font-normal text-ink-2">{before === undefined ? 'new' : ''}</span>
      </td>
      <td>
        {onEdit ? (
          <select aria-label={`bus of ${settings.name}`} className={`bg-transparent ${tone('bus')}`} value={settings.bus} onChange={(e) => put('bus', e.target.value)}>
            {Object.entries(set.buses).map(([key, b]) => (
              <option key={key} value={key} className="bg-sheet text-ink">
                {b.name}
              </option>
            ))}
          </select>
        ) : (
          (set.buses[settings.bus]?.name ?? settings.bus)
        )}
        {was('bus')}
      </td>
      <td>
        {onEdit ? (
          <AddressInput label={`address of ${settings.name}`} value={settings.address} className={tone('address')} taken={others.map(([, j]) => ({ address: j.address, name: j.name }))} onSettle={(a) => put('address', a)} />
        ) : (
          <HexAddress address={settings.address} />
        )}
        {was('address', before && formatHex(before.address))}
      </td>
      <td>
        {onEdit ? (
          <select aria-label={`firmware of ${settings.name}`} className={`num bg-transparent ${tone('firmware')}`} value={settings.firmware} onChange={(e) => put('firmware', e.target.value)}>
            {versions.map((v) => (
              <option key={v} className="bg-sheet text-ink">
                {v}
              </option>
            ))}
          </select>
        ) : (
          <span className="num">{settings.firmware}</span>
        )}
        {was('firmware')}
      </td>
      <td>
        <PlainInput label={`board of ${settings.name}`} mono value={settings.board ?? ''} placeholder="–" className={tone('board')} pattern={/^[A-Za-z0-9][A-Za-z0-9._-]{0,39}$/} wrong="A serial number is letters, digits, points, hyphens and underscores." onSettle={onEdit && ((v) => put('board', v === '' ? undefined : v))} />
        {was('board')}
      </td>
      <td className="end">
        {onEdit && (
          <button type="button" className="link text-13" onClick={() => onEdit([{ pointer: toPointer(['joints', joint]), from: settings }])}>
            remove<span className="sr-only"> {settings.name}</span>
          </button>
        )}
      </td>
    </tr>
  )
}
