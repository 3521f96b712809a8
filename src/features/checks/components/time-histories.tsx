import { useId, useMemo } from 'react'
import { SeriesChart } from '../../../components/charts/series-chart.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { clampsOf, shownMs, signals, stepSeries, type sidesOf, type Signal } from '../report-data.ts'

type Sides = ReturnType<typeof sidesOf>

/** The simulated step: angle, speed, current and voltage under one another, with what the firmware clamps to. */
export function TimeHistories({ sides }: { sides: Sides }) {
  const together = useId()
  const end = useMemo(() => shownMs(sides), [sides])
  const drawn = sides.some(({ side }) => side.step)
  return (
    <section aria-label="time histories">
      <SectionHeading aux="clamps and friction kept">Time histories</SectionHeading>
      {drawn ? (
        <div className="mt-1 grid gap-y-2">
          {signals.map((signal) => (
            <History key={signal.name} signal={signal} sides={sides} end={end} together={together} />
          ))}
        </div>
      ) : (
        <p className="py-3 text-13 text-ink-2">No step was run: the loop is not stable.</p>
      )}
    </section>
  )
}

function History({ signal, sides, end, together }: { signal: Signal; sides: Sides; end: number; together: string }) {
  const series = useMemo(() => stepSeries(sides, signal), [sides, signal])
  const candidate = sides.at(-1)?.side
  const x = { label: 'time', unit: 'ms', min: 0, ...(Number.isFinite(end) ? { max: end } : {}) }
  // A clamp far beyond what the step asks for would press the curves flat.
  const most = Math.max(...series.flatMap((s) => s.y).map((v) => Math.abs(v ?? 0)))
  const limits = candidate ? clampsOf(candidate, signal).filter((v) => Math.abs(v) < 3 * most).map((value) => ({ value, kind: 'clamp' as const })) : []
  return <SeriesChart title={`${signal.label} of the step`} level={3} x={x} y={{ label: signal.label, unit: signal.unit }} series={series} limits={limits} height={112} together={together} hideLegend />
}
