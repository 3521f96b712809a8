import { use } from 'react'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { Button } from '../../../components/ui/button.tsx'
import { HelpButton } from '../../../components/ui/help-button.tsx'
import { OriginMark } from '../../../components/ui/origin-mark.tsx'
import { Ruler } from '../../../components/ui/ruler.tsx'
import { percentChange } from '../../../lib/format.ts'
import { rulerRange, stepOf } from '../ruler-range.ts'
import { heldText, numberOf, rangeText, registerText, shownValue } from '../typed-value.ts'
import { UnstableContext } from '../unstable-context.ts'
import { useTypedValue } from '../use-typed-value.ts'
import { promoted, waysBack } from '../ways-back.ts'
import { ownValuesOf, type Schemas, type ValueAt } from '../value-cells.ts'

export interface ValueInspectorProps {
  at: ValueAt
  set: MachineSet
  schemas: Schemas
  onEdit: ((edits: Edit[]) => void) | null
}

/** The chosen cell in full: ruler, register, what is inherited, and the ways between family and joint. */
export function ValueInspector({ at, set, onEdit }: ValueInspectorProps) {
  const { parameter, place } = at
  const typed = useTypedValue(at, onEdit ?? (() => {}))
  const range = rulerRange(at)
  const { joint, stretches, stale } = use(UnstableContext)
  const known = joint !== null && (place.kind === 'joint' ? place.joint === joint : set.joints[joint]?.family === place.family)
  const where = place.kind === 'family' ? `${set.families[place.family].name} family` : set.joints[place.joint].name
  const now = numberOf(at.value)
  const before = numberOf(at.released)
  const change = now !== null && before !== null ? percentChange(before, now) : null
  const ways = onEdit ? waysBack(at) : []
  const unit = parameter.unit ?? ''
  return (
    <section aria-label="chosen value" className="sheet grid items-start gap-x-6 gap-y-2 px-4 py-3 md:grid-cols-[minmax(180px,auto)_minmax(160px,1fr)_auto]">
      <div>
        <p className="text-13">
          <b>{parameter.title}</b> {parameter.role && <HelpButton topic={`role:${parameter.role}`} about={parameter.title} ofChosen />} <span className="text-ink-2">{where}</span>
        </p>
        <p className="flex items-baseline gap-[6px]">
          <span className={`num text-20 font-medium ${at.changed ? 'text-brass' : ''}`}>{shownValue(at.value)}</span>
          <span className="unit text-13">{unit}</span>
          <OriginMark origin={at.origin} />
        </p>
        <p className="text-12 text-ink-2">
          {at.changed ? <>released <span className="num">{shownValue(at.released)}</span>{change && <span className="num"> {change} %</span>}</> : 'as released'}
        </p>
      </div>
      <div>
        {range && (
          <Ruler
            label={`${parameter.title}, ${where}`}
            unit={unit}
            min={range.min}
            max={range.max}
            scale={range.scale}
            value={now}
            released={before}
            step={stepOf(at)}
            unstable={known ? stretches.get(parameter.name) : undefined}
            fading={stale}
            flags={place.kind === 'family' ? ownValuesOf(set, place.family, parameter.name).flatMap((o) => numberOf(o.value) ?? []) : undefined}
            onChange={onEdit ? (v) => typed.move(String(v)) : undefined}
            onSettle={onEdit ? (v) => typed.move(String(v)) : undefined}
          />
        )}
        <p className="text-12 text-ink-2">
          {[rangeText(parameter) && `${rangeText(parameter)}${unit ? ` ${unit}` : ''}`, parameter.register && `register ${registerText(parameter)}`, heldText(parameter, at.value), parameter.boardBound && 'bound to the board it was measured on'].filter(Boolean).join('; ')}
        </p>
        {parameter.description && <p className="text-12 text-ink-2">{parameter.description}</p>}
      </div>
      {onEdit && (
        <div className="flex flex-col items-start gap-2">
          {ways.map((way) => (
            <Button
              key={way.words}
              small
              onClick={() => {
                typed.cancel()
                onEdit([way.edit])
              }}
            >
              {`${way.words[0].toUpperCase()}${way.words.slice(1)}`}
            </Button>
          ))}
          {place.kind === 'joint' && at.own !== undefined && (
            <Button small onClick={() => onEdit(promoted(at, set))}>
              Give to the whole family
            </Button>
          )}
        </div>
      )}
    </section>
  )
}
