import type { ComparedField, ComparedJoints, ComparedValue } from '../../../../shared/contract/comparisons.ts'
import { valueText } from '../../../components/layout/value-text.ts'
import { OriginMark } from '../../../components/ui/origin-mark.tsx'
import { percentChange } from '../../../lib/format.ts'

/** What differs of joints by value: where they sit, the model, and each parameter in its unit. */
export function GroupValues({ group }: { group: ComparedJoints }) {
  return (
    <div className="overflow-x-auto" tabIndex={0} role="region" aria-label={`values of ${group.joints.map((j) => j.name).join(', ')}`}>
      <table className="table table-dense" aria-label={`values that differ of ${group.joints.map((j) => j.name).join(', ')}`}>
        <thead>
          <tr>
            <th scope="col">Parameter</th>
            <th scope="col">A</th>
            <th scope="col">B</th>
            <th scope="col" className="text-right">
              Change
            </th>
          </tr>
        </thead>
        <tbody>
          {group.settings.map((f) => (
            <FieldRow key={`setting ${f.field}`} field={f} />
          ))}
          {group.values.map((v) => (
            <ValueRow key={`value ${v.parameter} ${v.nameA ?? ''}`} value={v} />
          ))}
          {group.driveTrain.map((f) => (
            <FieldRow key={`model ${f.field}`} field={f} of="drive train " />
          ))}
        </tbody>
      </table>
    </div>
  )
}

function FieldRow({ field, of = '' }: { field: ComparedField; of?: string }) {
  return (
    <tr>
      <td>
        {of && <span className="text-13 text-ink-2">{of}</span>}
        <span className={of ? 'num' : ''}>{field.field}</span>
      </td>
      <td className="num text-13">{field.a ?? '–'}</td>
      <td className="num text-13 text-brass">{field.b ?? '–'}</td>
      <td />
    </tr>
  )
}

function ValueRow({ value }: { value: ComparedValue }) {
  const { a, b } = value
  const change = typeof a?.value === 'number' && typeof b?.value === 'number' && value.changePercent !== null ? percentChange(a.value, b.value) : null
  return (
    <tr>
      <td className="whitespace-nowrap">
        {value.title} <span className="num text-12 text-ink-2">{value.parameter}</span>
        {value.nameA && <span className="num block text-12 text-ink-2">A calls it {value.nameA}</span>}
      </td>
      <td>
        <Side side={a} unit={value.unitA} />
      </td>
      <td className="text-brass">
        <Side side={b} unit={value.unitB} />
      </td>
      <td className="num text-right text-13">{change && <>{change}<span className="unit ml-[.22em]">%</span></>}</td>
    </tr>
  )
}

function Side({ side, unit }: { side: ComparedValue['a']; unit: string }) {
  if (!side) return <span className="text-13 text-ink-2">has none</span>
  return (
    <span className="inline-flex flex-wrap items-baseline gap-x-2">
      <span className="whitespace-nowrap">
        <span className="num">{valueText(side.value)}</span>
        {unit && <span className="unit ml-[.22em]">{unit}</span>}
      </span>
      {side.origin ? <OriginMark origin={side.origin} /> : <span className="text-12 text-ink-2">on the board</span>}
    </span>
  )
}
