import { useQuery } from '@tanstack/react-query'
import { useId, useMemo } from 'react'
import type { ComparisonView } from '../../../../shared/contract/evidence.ts'
import { SeriesChart } from '../../../components/charts/series-chart.tsx'
import { Region } from '../../../components/layout/region.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { formatNumber } from '../../../lib/format.ts'
import { comparisonQuery } from '../queries.ts'
import { share } from '../words.ts'

export interface MeasuredPredictedProps {
  machine: string
  number: number
  /** a change's key, "release", or empty for what the log itself is for */
  against: string
  from: number | null
  /** chooses what it is held against */
  chooser: React.ReactNode
}

/** The log over what the model would have done with the log's own set-point. */
export function MeasuredPredicted({ machine, number, against, from, chooser }: MeasuredPredictedProps) {
  const query = useQuery(comparisonQuery(machine, number, { against, from }))
  return (
    <section aria-labelledby="predicted" className="mb-8">
      <SectionHeading id="predicted" aux={query.data && `model of ${query.data.modelOf}`}>
        Measured over predicted
      </SectionHeading>
      <div className="mt-2">{chooser}</div>
      <Region query={query} what="the prediction" lines={8}>
        {(data) => <Compared data={data} candidate={data.modelOf.startsWith('change')} />}
      </Region>
    </section>
  )
}

function Compared({ data, candidate }: { data: ComparisonView; candidate: boolean }) {
  const together = useId()
  return (
    <>
      <table className="mt-2 w-full max-w-[560px] text-13" aria-label="error of the prediction">
        <thead>
          <tr className="border-b border-rule text-left text-12 text-ink-2">
            <th scope="col" className="py-1 font-normal">signal</th>
            <th scope="col" className="py-1 text-right font-normal">RMS error</th>
            <th scope="col" className="py-1 text-right font-normal">of its span</th>
          </tr>
        </thead>
        <tbody>
          {data.signals.map((s) => (
            <tr key={s.signal} className="border-b border-hairline">
              <th scope="row" className="py-1 text-left font-normal">{s.signal}</th>
              <td className="py-1 text-right"><Num value={s.rmsError} unit={s.unit === '1' ? '' : s.unit} digits={3} /></td>
              <td className="num py-1 text-right">{s.normalisedRmsError === null ? 'does not move' : share(s.normalisedRmsError)}</td>
            </tr>
          ))}
        </tbody>
      </table>
      <p className="mt-1 text-12 text-ink-2">
        simulated with the log’s own set-point from <span className="num">{formatNumber(data.from, { digits: 4 })}</span> to <span className="num">{formatNumber(data.to, { digits: 4 })}</span> s, read off at the log’s own rows
      </p>
      {data.repairs.length > 0 && <ul className="mt-1 text-13 text-ink-2">{data.repairs.map((r) => <li key={r}>{r}</li>)}</ul>}
      <div className="mt-3 grid gap-y-3">
        {data.signals.map((s) => (
          <Signal key={s.signal} data={data} signal={s} candidate={candidate} together={together} />
        ))}
      </div>
    </>
  )
}

const followed: Record<string, string> = { rad: 'position', 'rad/s': 'speed', A: 'current' }

function Signal({ data, signal, candidate, together }: { data: ComparisonView; signal: ComparisonView['signals'][number]; candidate: boolean; together: string }) {
  const series = useMemo(
    () => [
      ...(followed[data.setPoint.unit] === signal.signal ? [{ label: 'set-point', role: 'set-point' as const, ...data.setPoint.drawn, stepped: true }] : []),
      { label: 'measured', role: 'measured' as const, ...signal.measured },
      { label: 'predicted', role: candidate ? ('candidate' as const) : ('released' as const), ...signal.predicted },
    ],
    [data, signal, candidate],
  )
  return <SeriesChart title={`${signal.signal}, measured and predicted`} level={3} x={{ label: 'time', unit: 's', min: data.from, max: data.to }} y={{ label: signal.signal, unit: signal.unit }} series={series} height={150} together={together} />
}
