import type { IdentifiedLetter, IdentifiedValue } from '../../../../shared/contract/evidence.ts'
import { Checkbox } from '../../../components/ui/checkbox.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { share } from '../words.ts'

const letterWords: Record<IdentifiedLetter, string> = { R: 'winding resistance at 25 °C', k_e: 'back-EMF constant', L: 'winding inductance', J: 'inertia at the output, rotor included', b: 'drag at the output, rotor included', tau_c: 'friction moving, at the output' }

/** One line a value: what it is, with its standard error, beside what stands; or why there is none, and which run would show it. */
export function IdentifiedTable({ values, chosen, onChoose }: { values: readonly IdentifiedValue[]; chosen: ReadonlySet<IdentifiedLetter>; onChoose: (chosen: ReadonlySet<IdentifiedLetter>) => void }) {
  const toggle = (letter: IdentifiedLetter, on: boolean) => onChoose(new Set(on ? [...chosen, letter] : [...chosen].filter((l) => l !== letter)))
  return (
    <ul className="border-t border-rule" aria-label="identified values">
      {values.map((v) => (
        <li key={v.letter} className="grid grid-cols-[minmax(0,1fr)] gap-x-4 border-b border-hairline py-2 sm:grid-cols-[minmax(0,1fr)_190px_190px]">
          <span>
            {v.edit ? <Checkbox label={letterLabel(v)} checked={chosen.has(v.letter)} onChange={(on) => toggle(v.letter, on)} /> : <span>{letterLabel(v)}</span>}
            {v.value === null && (
              <span className="block text-13 text-ink-2">
                {v.reason} <span className="text-ink">{v.remedy}</span>
              </span>
            )}
            {v.unusable && <span className="block text-13 text-plum">{v.unusable}</span>}
            {v.edit && <span className="block text-12 text-ink-2">to {v.editWords}</span>}
          </span>
          {v.value === null ? (
            <span className="text-13 text-ink-2 sm:text-right">not shown by this run</span>
          ) : (
            <span className="sm:text-right">
              <Num value={v.value} unit={v.unit} digits={4} />
              <span className="block text-12 text-ink-2">
                ± <Num value={v.standardError} unit={v.unit} digits={2} />, {share(Math.abs(v.standardError! / v.value))}
              </span>
            </span>
          )}
          <span className="text-13 text-ink-2 sm:text-right">
            {v.modelled === null ? 'not in the drive train' : <>model <Num value={v.modelled} unit={v.unit} digits={4} /></>}
          </span>
        </li>
      ))}
    </ul>
  )
}

const letterLabel = (v: IdentifiedValue) => (
  <>
    <span className="num">{v.letter === 'tau_c' ? 'τ_c' : v.letter}</span> {letterWords[v.letter]}
  </>
)
