import type { HeatFigures } from '../../../../shared/contract/checks.ts'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { formatNumber } from '../../../lib/format.ts'

const seconds = (s: number) => <Num value={s < 1000 ? s : String(Math.round(s))} unit="s" />
const degrees = (t: number) => <Num value={t.toFixed(1)} unit="°C" />

/** How warm the winding becomes and how long the peak current may last. */
export function HeatTable({ candidate, released, base }: { candidate: HeatFigures | null; released: HeatFigures | null; base: string | null }) {
  if (!candidate)
    return (
      <section>
        <SectionHeading>Winding heat</SectionHeading>
        <p className="py-2 text-13 text-ink-2">The drive train holds no thermal data; nothing was computed.</p>
      </section>
    )
  const peak = (heat: HeatFigures, words: string) =>
    heat.peakA === null ? [] : [{ key: `${formatNumber(heat.peakA)} A from ${formatNumber(heat.ambientCelsius)} °C ${words}`, value: heat.timeAtPeakS === null ? heat.timeAtPeakReads : seconds(heat.timeAtPeakS) }]
  return (
    <section>
      <SectionHeading aux={`${candidate.nodes === 1 ? 'one node' : 'two nodes'}, ${formatNumber(candidate.ambientCelsius)} °C around`}>Winding heat</SectionHeading>
      <KeyValueList
        className="mt-2"
        align="end"
        entries={[
          { key: candidate.continuousA === null ? 'winding, steady' : `winding at ${formatNumber(candidate.continuousA)} A, steady`, value: candidate.steadyCelsius === null ? candidate.steadyReads : degrees(candidate.steadyCelsius) },
          { key: 'winding bears', value: degrees(candidate.limitCelsius) },
          { key: 'largest lasting current', value: <Num value={candidate.continuousCurrentA} unit="A" /> },
          ...peak(candidate, 'may last'),
          ...(released && released.peakA !== candidate.peakA ? peak(released, `in ${base ?? 'the release'}`) : []),
        ]}
      />
    </section>
  )
}
