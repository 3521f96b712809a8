import { EffectRuler } from '../../../components/ui/effect-ruler.tsx'
import { HelpButton } from '../../../components/ui/help-button.tsx'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { formatNumber } from '../../../lib/format.ts'
import type { Figure } from '../figures.ts'

const shown = (value: number | null, reads: string, unit: string) => (value === null ? reads || '–' : unit === 'Hz' || unit === '' ? formatNumber(value) : value.toFixed(1))

/** Each figure is explained where it comes first, not once for every loop. */
const firstOf = (figures: readonly Figure[], i: number) => figures.findIndex((f) => f.name === figures[i].name) === i

/** Margins and bandwidth of each loop, before and after, with policy on the ruler. */
export function FigureRows({ figures, label, oneLoop = false }: { figures: readonly Figure[]; label: string; oneLoop?: boolean }) {
  return (
    <table className="table table-dense" aria-label={label}>
      <tbody>
        {figures.map((f, i) => (
          <tr key={`${f.loop} ${f.name}`}>
            <td role="rowheader" className="!px-0">
              <span className={oneLoop || (i > 0 && figures[i - 1].loop === f.loop) ? 'sr-only' : ''}>{f.loop}</span>
            </td>
            <td className={`${oneLoop ? '!pl-0' : '!px-2'} text-13 text-ink-2`} title={f.name}>
              {oneLoop ? f.name : f.brief}
            </td>
            <td className="end num !px-0 text-13">{shown(f.before, f.beforeReads, f.unit)}</td>
            <td className="!px-0 text-center">
              <Arrow />
            </td>
            <td className={`end num !px-0 text-13 font-medium ${f.after === null && f.afterReads === 'unstable' ? 'text-oxide' : f.missed ? 'text-plum' : ''}`}>{shown(f.after, f.afterReads, f.unit)}</td>
            <td className="unit !px-1 text-13 whitespace-nowrap">
              {f.after !== null && f.unit} {(oneLoop || firstOf(figures, i)) && <HelpButton topic={`figure:${f.name}`} about={f.name} />}
            </td>
            <td className="!pr-0 !pl-1">
              {f.after !== null && (
                <EffectRuler
                  label={`${f.loop} ${f.name}`}
                  before={f.before}
                  after={f.after}
                  min={f.range[0]}
                  max={f.range[1]}
                  unit={f.unit}
                  scale={f.unit === 'Hz' ? 'log' : 'linear'}
                  policy={f.policy === null ? undefined : { limit: f.policy, forbidden: f.name === 'sensitivity peak' ? 'above' : 'below' }}
                  width={oneLoop ? 122 : 104}
                />
              )}
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}
