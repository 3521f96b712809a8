import type { DriveTrain } from '../../../../shared/parameters/machine-set.ts'
import { bounds, nominal } from '../../../../shared/parameters/quantity.ts'
import { Num } from '../../../components/ui/num.tsx'
import { formatNumber, formatQuantity } from '../../../lib/format.ts'
import { driveTrainGroups, isQuantity, letterParts } from '../drive-train-parts.ts'
import type { DriveTrainPart } from '../drive-train-parts.ts'

/** The physical model of a family, by parts; each value with its bounds where it has them. */
export function DriveTrainSheet({ driveTrain, before }: { driveTrain: DriveTrain; before?: DriveTrain }) {
  return (
    <div className="columns-1 gap-x-10 pt-2 md:columns-2 2xl:columns-3">
      {driveTrainGroups.map((group) => (
        <section key={group.name} className="mb-4 break-inside-avoid" aria-label={group.name}>
          <h3 className="border-b border-rule pb-1 text-13">{group.name}</h3>
          <dl>
            {group.parts.map((part) => (
              <div key={part.letter} className="flex items-baseline gap-2 border-b border-hairline py-[3px] text-13">
                <dt className="min-w-0 flex-1 text-ink-2">
                  {part.name}
                  <Letter of={part.letter} />
                </dt>
                <dd className="text-right">
                  <PartValue part={part} value={driveTrain[part.letter]} />
                  {before && before[part.letter] !== undefined && JSON.stringify(before[part.letter]) !== JSON.stringify(driveTrain[part.letter]) && (
                    <span className="block text-12 text-ink-2">
                      before <PartValue part={part} value={before[part.letter]} />
                    </span>
                  )}
                </dd>
              </div>
            ))}
          </dl>
        </section>
      ))}
    </div>
  )
}

function Letter({ of }: { of: string }) {
  const { base, subscript } = letterParts(of)
  if (base.length > 1) return null
  return (
    <i className="ml-2 text-ink">
      {base}
      {subscript && <sub className="text-[0.8em] leading-none not-italic">{subscript}</sub>}
    </i>
  )
}

function PartValue({ part, value }: { part: DriveTrainPart; value: DriveTrain[keyof DriveTrain] }) {
  if (value === undefined) return part.absent ? <span className="text-ink-2">{part.absent}</span> : <Num value={null} />
  if (!isQuantity(value)) return <>{value}</>
  const range = bounds(value)
  const digits = (v: number) => Math.min(6, Math.max(3, String(v).replace(/^0?\.0*|e.*$|\./g, '').length))
  const shown = nominal(value)
  if (part.unit.includes(' ')) return <><span className="num">{shown}</span> <span className="unit">{part.unit}</span></>
  if (!range) return <Num value={shown} unit={part.unit} digits={digits(shown)} />
  const power = powerOf(formatQuantity(shown, part.unit), part.unit)
  const [low, high] = range.map((v) => formatNumber(v / 10 ** power, { digits: 4 }))
  return (
    <span title="value, and the bounds that the tolerance sweep walks">
      <Num value={shown} unit={part.unit} digits={digits(shown)} />
      <span className="num ml-2 text-12 text-ink-2">
        {low} … {high}
      </span>
    </span>
  )
}

const PREFIX_POWERS: Record<string, number> = { G: 9, M: 6, k: 3, m: -3, µ: -6, n: -9, p: -12 }

/** Power of ten that a quantity was written in, so that its bounds are written in the same. */
const powerOf = (written: { unit: string; power: number }, unit: string) => written.power + (PREFIX_POWERS[written.unit.slice(0, written.unit.length - unit.length)] ?? 0)
