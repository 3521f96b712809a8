import type { Corner, ToleranceBound, ToleranceFigures } from '../../../../shared/contract/checks.ts'
import { shown } from './finding.ts'

const names: Record<string, string> = { T_winding: 'winding', V_bus: 'supply', eta: 'η' }

function bound(b: ToleranceBound, value: number): string {
  const name = names[b.name] ?? b.name
  if (b.name === 'T_winding' || b.name === 'V_bus') return `${name} ${shown(value)} ${b.unit}`
  if (b.name === 'eta') return `${name} ${shown(Number(value.toPrecision(3)))}`
  const percent = (value / b.nominal - 1) * 100
  return b.nominal === 0 ? `${name} ${shown(value)} ${b.unit}` : `${name} ${percent < 0 ? '−' : '+'}${shown(Math.abs(Number(percent.toPrecision(2))))} %`
}

/** A corner as a sentence shows it: "winding 105 °C, supply 21 V, k_t +7 %, J_load −30 %". */
export const cornerWords = ({ bounds }: Pick<ToleranceFigures, 'bounds'>, { values }: Corner): string => bounds.map((b) => bound(b, values[b.name])).join(', ')

/** What the worst was looked for over. */
export const coverage = (t: ToleranceFigures): string => `${t.vertices.points} corners and ${t.samplesWithMargins} samples`
