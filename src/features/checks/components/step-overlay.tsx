import { useQuery } from '@tanstack/react-query'
import { useMemo } from 'react'
import type { JointReportView } from '../../../../shared/contract/checks.ts'
import { SeriesChart } from '../../../components/charts/series-chart.tsx'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { formatDb, formatDegrees, quantityText } from '../../../lib/format.ts'
import { boxName } from '../letters.ts'
import { jointReportQuery } from '../queries.ts'
import { cornerText, cornerUnit, shownMs, sidesOf, signals, stepSeries } from '../report-data.ts'
import { BeforeAfter } from './before-after.tsx'
import { worstLoop } from './tolerance-table.tsx'

/** Step of a joint before, after and at its worst corner, with that corner named; read for the inputs that were checked, not while newer ones are. Nothing while it is first computed: the figures above stand already. */
export function StepOverlay({ change, inputs, joint, enabled }: { change: string; inputs: string; joint: string; enabled: boolean }) {
  const query = useQuery({ ...jointReportQuery(change, inputs, joint), enabled })
  // Quiet: an alert here would speak over what is wrong with a value being typed.
  if (query.isError && !query.data)
    return (
      <p className="mt-4 text-13 text-ink-2">
        The step and the worst corner could not be read: {query.error.message}{' '}
        <button type="button" className="link" onClick={() => void query.refetch()}>
          Try again
        </button>
      </p>
    )
  return query.data?.candidate ? <Overlay report={query.data} /> : null
}

function Overlay({ report }: { report: JointReportView }) {
  const sides = useMemo(() => sidesOf(report, null), [report])
  const step = report.candidate?.figures.step ?? report.released?.figures.step ?? null
  const signal = signals.find((s) => s.response === step?.response)
  const series = useMemo(() => (signal ? stepSeries(sides, signal) : []), [sides, signal])
  const end = shownMs(sides)
  return (
    <>
      {step && signal && series.length > 0 && (
        <SeriesChart className="mt-4" level={3} title={`Step of ${quantityText(step.stepTo, signal.unit)}`} x={{ label: 'time', unit: 'ms', min: 0, ...(Number.isFinite(end) ? { max: end } : {}) }} y={{ label: signal.label, unit: signal.unit }} series={series} height={150} />
      )}
      <WorstCorner report={report} />
    </>
  )
}

function WorstCorner({ report }: { report: JointReportView }) {
  const swept = report.candidate?.figures.tolerance
  const row = report.vertices?.[0]
  if (!swept || !row) return null
  const loop = worstLoop(row)
  const [now, then] = [loop ? row.loops[loop] : undefined, loop && report.touched ? row.released?.[loop] : undefined]
  const bounds = swept.vertexNames.flatMap((name) => swept.bounds.find((b) => b.name === name) ?? [])
  return (
    <section className="mt-4" aria-label="worst corner">
      <SectionHeading level={3} aux={row.verdict === 'stable' ? `${loop} loop` : row.verdict}>
        Worst corner
      </SectionHeading>
      <KeyValueList
        className="mt-1"
        align="end"
        entries={[
          ...bounds.map((b) => ({ key: boxName(b.name), value: <span className="num">{`${cornerText(b, row.values[b.name])} ${cornerUnit(b)}`}</span> })),
          ...(now && row.verdict === 'stable'
            ? [
                { key: 'phase', value: <BeforeAfter before={then?.phaseMarginDeg == null ? null : formatDegrees(then.phaseMarginDeg)} after={now.phaseMarginDeg === null ? 'none up to 180°' : `${formatDegrees(now.phaseMarginDeg)}°`} className="num" /> },
                { key: 'gain', value: <BeforeAfter before={then?.gainMarginDb == null ? null : formatDb(then.gainMarginDb)} after={now.gainMarginDb === null ? 'above 60 dB' : `${formatDb(now.gainMarginDb)} dB`} className="num" /> },
              ]
            : []),
        ]}
      />
    </section>
  )
}
