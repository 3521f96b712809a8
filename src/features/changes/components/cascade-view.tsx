import type { Edit } from '../../../../shared/parameters/edits.ts'
import { byLaw } from '../../../../shared/parameters/laws.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import type { Role } from '../../../../shared/registers/roles.ts'
import { toSi } from '../../../../shared/units/quantity.ts'
import { CascadeDiagram } from '../../../components/charts/cascade-diagram.tsx'
import { EmptyState } from '../../../components/ui/empty-state.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { formatQuantity } from '../../../lib/format.ts'
import { numberOf, shownValue } from '../typed-value.ts'
import { jointsOf, parametersOfFamily, parameterOfJoint, valueAtPlace, type Place, type Schemas, type ValueAt } from '../value-cells.ts'
import { DriveTrainBlock } from './drive-train-block.tsx'
import { EditableValue } from './editable-value.tsx'

export interface CascadeViewProps {
  set: MachineSet
  base: MachineSet
  schemas: Schemas
  family: string
  /** one joint; null for the family's values */
  joint: string | null
  onEdit: ((edits: Edit[]) => void) | null
  /** where the drive train is edited */
  driveTrainTo: string
}

const blocks = {
  position: ['position.kp', 'position.ki', 'speed.limit'],
  velocity: ['velocity.kp', 'velocity.ki', 'current.limit'],
  current: ['current.kp', 'current.ki', 'output.delay'],
  window: ['velocity.window'],
  sensor: ['encoder.offset', 'encoder.direction'],
} as const satisfies Record<string, readonly Role[]>
const inDiagram = new Set<string>(Object.values(blocks).flat())

/** The control cascade with each value where it acts; what has no place in it stands below, by law. */
export function CascadeView({ set, base, schemas, family, joint, onEdit, driveTrainTo }: CascadeViewProps) {
  const place: Place = joint ? { kind: 'joint', joint, family } : { kind: 'family', family }
  const values = parametersOfFamily(set, family, schemas).flatMap((p): ValueAt[] => {
    const own = joint ? parameterOfJoint(set, joint, p.name, schemas) : p
    const at = own && valueAtPlace(set, base, place, own, schemas)
    return at ? [at] : []
  })
  if (values.length === 0) return <EmptyState title="No values yet">Give the family a joint with a firmware version; its parameters then stand here.</EmptyState>

  const byRole = new Map(values.flatMap((v) => (v.parameter.role ? [[v.parameter.role, v] as const] : [])))
  const cells = (roles: readonly Role[], title?: string) => roles.flatMap((r) => byRole.get(r) ?? []).map((at) => <EditableValue key={at.pointer} at={at} set={set} onEdit={onEdit} title={title} />)
  const clamp = (role: Role, factor = 1) => {
    const at = byRole.get(role)
    const n = numberOf(at?.value)
    return at && n !== null ? <>clamp ±<Num value={n * factor} unit={at.parameter.unit ?? ''} /></> : undefined
  }
  const rate = (role: Role) => {
    const at = byRole.get(role)
    const n = numberOf(at?.value)
    if (!at || n === null) return ''
    const q = formatQuantity(toSi(n, at.parameter.unit), 'Hz', { digits: 4 })
    return `${q.number} ${q.unit}`
  }
  const mode = String(byRole.get('control.mode')?.value ?? 'position')
  const { driveTrain } = set.families[family]
  const rest = byLaw(values.filter((v) => v.parameter.role === null || !inDiagram.has(v.parameter.role)).map((at) => ({ role: at.parameter.role, at })))
  return (
    <>
      <CascadeDiagram
        mode={mode === 'velocity' || mode === 'current' ? mode : 'position'}
        outerRate={rate('rate.outer')}
        currentRate={rate('rate.current')}
        position={{ note: clamp('speed.limit'), children: cells(blocks.position) }}
        velocity={{ note: clamp('current.limit'), children: cells(blocks.velocity) }}
        current={{ note: voltageClamp(byRole), children: cells(blocks.current) }}
        velocityWindow={byRole.has('velocity.window') ? { children: <>{cells(blocks.window, 'Samples')}{lag(byRole)}</> } : undefined}
        sensor={{
          note: `on the ${driveTrain.encoder}, ${driveTrain.bits} bit`,
          children: <div className="grid sm:grid-cols-2">{joint || onEdit === null ? cells(blocks.sensor) : <SensorOfFamily set={set} base={base} schemas={schemas} family={family} byRole={byRole} onEdit={onEdit} />}</div>,
        }}
        driveTrain={{ note: `${set.families[family].name}`, children: <DriveTrainBlock driveTrain={driveTrain} before={base.families[family]?.driveTrain} editTo={onEdit ? driveTrainTo : null} torque={torque(byRole, set, family)} /> }}
      />
      {rest.length > 0 && (
        <div className="mt-6 grid gap-x-6 gap-y-4 sm:grid-cols-2 xl:grid-cols-3">
          {rest.map(({ law, things }) => (
            <section key={law}>
              <SectionHeading>{law}</SectionHeading>
              <div className="sheet mt-1">
                {things.map(({ at }) => (
                  <EditableValue key={at.pointer} at={at} set={set} onEdit={onEdit} />
                ))}
              </div>
            </section>
          ))}
        </div>
      )}
    </>
  )
}

type ByRole = ReadonlyMap<Role, ValueAt>

const si = (byRole: ByRole, role: Role): number | null => {
  const at = byRole.get(role)
  const n = numberOf(at?.value)
  return at && n !== null ? toSi(n, at.parameter.unit) : null
}

/** Current law: the request is held to the duty limit of the nominal supply. */
function voltageClamp(byRole: ByRole) {
  const [duty, supply] = [si(byRole, 'duty.limit'), si(byRole, 'supply.nominal')]
  return duty !== null && supply !== null ? <>clamp ±<Num value={duty * supply} unit="V" /></> : undefined
}

/** The window lags by half its span. */
function lag(byRole: ByRole) {
  const [window, rate] = [si(byRole, 'velocity.window'), si(byRole, 'rate.outer')]
  return window !== null && rate !== null && rate > 0 ? <p className="px-3 pb-2 text-12 text-ink-2">lags the speed by <Num value={window / rate / 2} unit="s" /></p> : undefined
}

function torque(byRole: ByRole, set: MachineSet, family: string): number | null {
  const limit = si(byRole, 'current.limit')
  const { N, k_t } = set.families[family].driveTrain
  return limit === null ? null : N * (typeof k_t === 'number' ? k_t : k_t.value) * limit
}

/** Offset and direction differ by joint, mostly: the family's own value with what each joint has. */
function SensorOfFamily({ set, base, schemas, family, byRole, onEdit }: Pick<CascadeViewProps, 'set' | 'base' | 'schemas' | 'family' | 'onEdit'> & { byRole: ByRole }) {
  return blocks.sensor.flatMap((role) => byRole.get(role) ?? []).map((at) => {
    const all = jointsOf(set, family).map((joint) => {
      const p = parameterOfJoint(set, joint, at.parameter.name, schemas)
      return p && valueAtPlace(set, base, { kind: 'joint', joint, family }, p, schemas)
    })
    const joints = all.flatMap((v) => (v?.own === undefined || v.place.kind !== 'joint' ? [] : [{ joint: v.place.joint, value: v.value }]))
    if (joints.length === 0) return <EditableValue key={at.pointer} at={at} set={set} onEdit={onEdit} />
    const [only] = all
    if (all.length === 1 && only) return <EditableValue key={at.pointer} at={only} set={set} onEdit={onEdit} />
    return (
      <div key={at.pointer} className="value-cell">
        <p className="text-13">{at.parameter.title}</p>
        <p className="text-16">{joints.length === 1 ? 'one joint has its own' : `${joints.length} joints have their own`}</p>
        <p className="num text-12 text-ink-2">{joints.map((j) => `${set.joints[j.joint].name} ${shownValue(j.value)}`).join(', ')}</p>
      </div>
    )
  })
}
