import { useMemo } from 'react'
import type { ReactNode } from 'react'
import { loopNames, type JointCheck, type JointFigures, type JointReportView, type LoopName } from '../../../../shared/contract/checks.ts'
import { BodeChart } from '../../../components/charts/bode-chart.tsx'
import { Legend } from '../../../components/charts/legend.tsx'
import { PolePlot } from '../../../components/charts/pole-plot.tsx'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { count } from '../../../lib/format.ts'
import { figuresOf } from '../figures.ts'
import { bodeMargins, bodeSeries, sidesOf } from '../report-data.ts'
import { BeforeAfter } from './before-after.tsx'
import { FigureRows } from './figure-rows.tsx'
import { HeatTable } from './heat-table.tsx'
import { StepMetrics } from './step-metrics.tsx'
import { TimeHistories } from './time-histories.tsx'
import { ToleranceTable } from './tolerance-table.tsx'

const brokenAt: Record<LoopName, string> = { current: 'broken at u', velocity: 'broken at i ref', position: 'broken at ω ref' }

export interface JointReportProps {
  report: JointReportView
  nameOf: (joint: string) => string
  /** version of the release that the change starts from */
  base: string | null
  /** the stability map, under the loops */
  map: ReactNode
  /** findings of this joint */
  findings: ReactNode
}

/** Everything the check computed for one joint. */
export function JointReport({ report, nameOf, base, map, findings }: JointReportProps) {
  const sides = useMemo(() => sidesOf(report, base), [report, base])
  const { candidate, touched } = report
  if (!candidate)
    return (
      <>
        <p className="mb-4 text-ink-2">Nothing was computed for {nameOf(report.joint)}; the findings say why.</p>
        {findings}
      </>
    )
  const released = touched ? report.released : null
  const loops = loopNames.filter((l) => candidate.figures.loops[l])
  const check: JointCheck = { joint: report.joint, touched, candidate: candidate.figures, released: released?.figures ?? null, imageSha256: null }
  const figures = figuresOf(check, report.findings)
  return (
    <>
      <div className="mb-5 flex flex-wrap items-end gap-x-10 gap-y-3">
        <div>
          <VerdictMark verdict={candidate.figures.verdict} size={30} className="text-20 font-medium" />
          <p className="text-13 text-ink-2">{[report.alike.length > 1 ? `the same for ${count(report.alike.length, 'joint')}` : '', touched ? (base ? `against ${base}` : 'no release before') : 'not touched by this change'].filter(Boolean).join(', ')}</p>
        </div>
        <KeyValueList entries={closedLoop(candidate.figures, released?.figures ?? null)} />
        <Legend entries={[...sides.map(({ label, role }) => ({ label, role })), ...(candidate.stepAtWorst ? [{ label: 'worst corner', role: 'worst vertex' as const }] : [])]} />
      </div>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-10 gap-y-8 lg:grid-cols-2 xl:grid-cols-3 print:grid-cols-2">
        {loops.map((loop) => (
          <section key={loop} aria-label={`${loop} loop`} className="break-inside-avoid">
            <Loop loop={loop} sides={sides} />
            <FigureRows figures={figures.filter((f) => f.loop === loop)} label={`${loop} loop of ${nameOf(report.joint)}`} oneLoop />
          </section>
        ))}
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-y-8">
          {map}
          {findings}
        </div>
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-y-8">
          <ToleranceTable report={report} base={base} />
          <PolePlot
            aux={`largest ${candidate.figures.rho.toFixed(6)}`}
            hideLegend
            sets={sides.map(({ side, role, label }) => ({ label, role, poles: side.figures.eigenvalues }))}
            note={<>Upper half. Frequencies are known only modulo <Num value={1 / candidate.figures.hyperperiodS} unit="Hz" digits={4} />.</>}
          />
          <HeatTable candidate={candidate.figures.heat} released={released?.figures.heat ?? null} base={base} />
        </div>
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-y-8">
          <TimeHistories sides={sides} />
          <StepMetrics candidate={candidate.figures.step} released={released?.figures.step ?? null} worst={candidate.figures.tolerance?.stepAtWorst ?? null} findings={report.findings} base={base} />
        </div>
      </div>
    </>
  )
}

function Loop({ loop, sides }: { loop: LoopName; sides: ReturnType<typeof sidesOf> }) {
  const series = useMemo(() => bodeSeries(sides, loop), [sides, loop])
  const candidate = sides.at(-1)!.side
  const title = `${loop[0].toUpperCase()}${loop.slice(1)} loop`
  if (series.length === 0)
    return (
      <>
        <SectionHeading>{title}</SectionHeading>
        <p className="py-3 text-13 text-ink-2">There is no curve: the loops inside this one are not stable.</p>
      </>
    )
  return <BodeChart title={title} aux={brokenAt[loop]} series={series} margins={bodeMargins(candidate, loop)} hideLegend />
}

function closedLoop(candidate: JointFigures, released: JointFigures | null) {
  const ms = (s: number | null | undefined) => (s === null || s === undefined ? null : s * 1e3)
  return [
    { key: 'ρ of one hyperperiod', value: <BeforeAfter before={released ? released.rho.toFixed(6) : null} after={candidate.rho.toFixed(6)} className="num" /> },
    { key: 'hyperperiod', value: <Num value={candidate.hyperperiodS} unit="s" digits={4} /> },
    { key: 'slowest time constant', value: <BeforeAfter before={ms(released?.slowestTimeConstantS)} after={ms(candidate.slowestTimeConstantS) ?? 'does not decay'} unit="ms" /> },
  ]
}
