import { use, useRef } from 'react'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { HelpButton } from '../../../components/ui/help-button.tsx'
import { OriginMark } from '../../../components/ui/origin-mark.tsx'
import { ValueCell } from '../../../components/ui/value-cell.tsx'
import { percentChange } from '../../../lib/format.ts'
import { rulerRange, stepOf } from '../ruler-range.ts'
import { numberOf, rangeText, shownValue, valueText } from '../typed-value.ts'
import { UnstableContext } from '../unstable-context.ts'
import { useTypedValue } from '../use-typed-value.ts'
import { promoted, waysBack } from '../ways-back.ts'
import { ownValuesOf, type ValueAt } from '../value-cells.ts'

export interface EditableValueProps {
  at: ValueAt
  set: MachineSet
  onEdit: ((edits: Edit[]) => void) | null
  /** other than the parameter's own, where the block says the rest */
  title?: string
}

/** A value in its block: typed with units, stepped, dragged along its ruler, set back to what is inherited. */
export function EditableValue(props: EditableValueProps) {
  const { parameter } = props.at
  return parameter.choices || parameter.kind === 'boolean' ? <Choice {...props} /> : <Quantity {...props} />
}

const helpOf = ({ parameter }: ValueAt) => (parameter.role ? `role:${parameter.role}` : undefined)

function Quantity({ at, set, onEdit, title }: EditableValueProps) {
  const typed = useTypedValue(at, onEdit ?? (() => {}))
  // The cell tells a move of the ruler and a key typed through the same call; the ruler writes its value first.
  const fromRuler = useRef(false)
  const range = rulerRange(at)
  const { stretches, stale } = use(UnstableContext)
  const [now, before] = [numberOf(at.value), numberOf(at.released)]
  const own = at.place.kind === 'family' ? ownValuesOf(set, at.place.family, at.parameter.name) : []
  return (
    <ValueCell
      title={title ?? at.parameter.title}
      help={helpOf(at)}
      value={onEdit ? typed.text : shownValue(at.value)}
      unit={at.parameter.unit ?? ''}
      origin={at.origin}
      change={now !== null && before !== null ? percentChange(before, now) : null}
      changed={at.changed}
      ruler={range && now !== null ? { ...range, value: now, released: before, step: stepOf(at), unstable: stretches.get(at.parameter.name), fading: stale, flags: own.flatMap((o) => numberOf(o.value) ?? []) } : undefined}
      step={stepOf(at)}
      write={(v) => {
        fromRuler.current = true
        return String(v)
      }}
      onChange={
        onEdit
          ? (text) => {
              if (fromRuler.current) typed.move(text)
              else typed.type(text)
              fromRuler.current = false
            }
          : undefined
      }
      onSettle={
        onEdit
          ? (text) => {
              if (fromRuler.current) typed.move(text)
              else typed.settle(text)
              fromRuler.current = false
            }
          : undefined
      }
      onCancel={onEdit ? typed.cancel : undefined}
      error={typed.error}
      note={<Notes at={at} set={set} own={own.length} onEdit={onEdit} onClear={typed.cancel} bare={range === null} />}
    />
  )
}

function Notes({ at, set, own, onEdit, onClear, bare }: { at: ValueAt; set: MachineSet; own: number; onEdit: EditableValueProps['onEdit']; onClear: () => void; bare: boolean }) {
  const parts = [
    own > 0 && `${own === 1 ? 'one joint has' : `${own} joints have`} a value of its own`.replace('have a value of its own', 'have values of their own'),
    bare && rangeText(at.parameter),
  ].filter(Boolean)
  // A family's values stand above firmware defaults as a rule; only what alters is worth a line here.
  const ways = onEdit && (at.place.kind === 'joint' || at.changed) ? waysBack(at).slice(0, 1) : []
  // A value bound to a board is a joint's own by nature.
  const up = onEdit !== null && at.place.kind === 'joint' && at.own !== undefined && !at.parameter.boardBound
  if (parts.length === 0 && ways.length === 0 && !up) return null
  return (
    <>
      {parts.join('; ')}
      {ways.map((way) => (
        <button
          key={way.words}
          type="button"
          className="link mr-3 text-12"
          onClick={() => {
            onClear()
            onEdit?.([way.edit])
          }}
        >
          {way.words}
          <span className="sr-only">, {at.parameter.title}</span>
        </button>
      ))}
      {up && (
        <button
          type="button"
          className="link text-12"
          onClick={() => {
            onClear()
            onEdit?.(promoted(at, set))
          }}
        >
          give to the family
          <span className="sr-only">, {at.parameter.title}</span>
        </button>
      )}
    </>
  )
}

/** A switch or one of a few words. */
function Choice({ at, set, onEdit, title }: EditableValueProps) {
  const typed = useTypedValue(at, onEdit ?? (() => {}))
  const choices = at.parameter.choices?.map(String) ?? ['on', 'off']
  const name = title ?? at.parameter.title
  return (
    <div className={`value-cell ${at.changed ? 'value-cell-changed' : ''}`}>
      <div className="flex justify-between gap-2 text-13">
        <span className="inline-flex items-baseline gap-[5px]">
          {name}
          {at.parameter.role && <HelpButton topic={`role:${at.parameter.role}`} about={name} />}
        </span>
        {at.changed && <span className="num text-12 text-ink-2">was {shownValue(at.released)}</span>}
      </div>
      <div className="flex items-baseline gap-[5px]">
        {onEdit ? (
          <select aria-label={name} className={`-ml-1 border-0 bg-transparent text-16 ${at.changed ? 'text-brass' : 'text-ink'}`} value={valueText(at.value)} onChange={(e) => typed.settle(e.target.value)}>
            {at.value === undefined && <option value="">–</option>}
            {choices.map((c) => (
              <option key={c} className="bg-sheet text-ink">
                {c}
              </option>
            ))}
          </select>
        ) : (
          <span className={`text-16 ${at.changed ? 'text-brass' : ''}`}>{shownValue(at.value)}</span>
        )}
        <span className="flex-1" />
        <OriginMark origin={at.origin} />
      </div>
      <p className="text-12 text-ink-2">
        <Notes at={at} set={set} own={0} onEdit={onEdit} onClear={typed.cancel} bare={false} />
      </p>
    </div>
  )
}
