import type { DriveTrain } from '../../../../shared/parameters/machine-set.ts'
import { same } from '../../../../shared/parameters/edits.ts'
import { Num } from '../../../components/ui/num.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { formatFixed } from '../../../lib/format.ts'
import { letterLines, partOf, toleranceOf, type Letter } from '../drive-train-letters.ts'
import { LetterSymbol } from './letter-symbol.tsx'

const shown: readonly Letter[] = ['R', 'L', 'k_t', 'N', 'eta', 'J_rotor', 'J_load', 'V_bus', 'k_s', 'tau_c', 'tau_gear']

/** The drive train at the end of the cascade: the letters that matter most, with tolerances in percent. */
export function DriveTrainBlock({ driveTrain, before, editTo, torque }: { driveTrain: DriveTrain; before: DriveTrain | undefined; editTo: string | null; torque: number | null }) {
  const lines = shown.map((letter) => letterLines.find((l) => l.letter === letter)!).filter((l) => driveTrain[l.letter] !== undefined)
  return (
    <div className="px-3 pt-2 pb-3">
      <dl className="grid grid-cols-[auto_minmax(0,1fr)_auto] items-baseline gap-x-2 text-13 leading-[21px]">
        {lines.map((l) => {
          const stored = driveTrain[l.letter]
          const altered = before !== undefined && !same(stored, before[l.letter])
          const t = toleranceOf(stored)
          return (
            <div key={l.letter} className="contents">
              <dt className="text-ink-2" title={l.words}>
                <LetterSymbol line={l} />
              </dt>
              <dd className={`text-right ${altered ? 'text-brass' : ''}`}>
                <Num {...inGrams(partOf(stored, 'value'), l.unit)} />
              </dd>
              <dd className="num text-right text-12 text-ink-2">{t && (Math.abs(t.low + t.high) < 0.05 ? <>±{formatFixed(t.high, 0)}</> : <>{formatFixed(t.low, 0, { plus: true })}<br />{formatFixed(t.high, 0, { plus: true })}</>)}</dd>
            </div>
          )
        })}
      </dl>
      <p className="mt-2 text-12 text-ink-2">
        last column: tolerance in percent.
        {torque !== null && <> Torque at the clamp <Num value={torque} unit="N·m" />.</>}
      </p>
      {editTo && (
        <TextLink to={editTo} className="text-12">
          edit the drive train
        </TextLink>
      )}
    </div>
  )
}


/** An inertia in g·m² or mg·m²: kilograms take no prefix, and powers of ten do not fit here. */
function inGrams(value: number | string | undefined, unit: string | null): { value: number | string | undefined; unit: string } {
  if (unit !== 'kg·m²' || typeof value !== 'number' || value === 0) return { value, unit: unit ?? '' }
  if (Math.abs(value) >= 1) return { value, unit }
  return Math.abs(value) >= 1e-3 ? { value: value * 1e3, unit: 'g·m²' } : { value: value * 1e6, unit: 'mg·m²' }
}
