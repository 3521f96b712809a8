import { useQuery } from '@tanstack/react-query'
import { useId, useMemo, useState } from 'react'
import type { LogReading, LogWindow } from '../../../../shared/contract/evidence.ts'
import { SeriesChart } from '../../../components/charts/series-chart.tsx'
import { Region } from '../../../components/layout/region.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { count, formatNumber, parseNumber } from '../../../lib/format.ts'
import { seriesQuery } from '../queries.ts'

export interface Stretch {
  from: number | null
  to: number | null
}

/** The log as measured. Of every piece the least and the greatest are drawn, so that no peak is lost; a stretch may be looked at closer. */
export function LogCharts({ machine, number, reading, stretch, onStretch }: { machine: string; number: number; reading: LogReading; stretch: Stretch; onStretch: (stretch: Stretch) => void }) {
  const window = useQuery(seriesQuery(machine, number, stretch))
  return (
    <section aria-labelledby="measured" className="mb-8">
      <SectionHeading id="measured" aux={window.data && drawnWords(window.data)}>
        As measured
      </SectionHeading>
      <StretchForm key={`${stretch.from} ${stretch.to}`} reading={reading} stretch={stretch} onStretch={onStretch} />
      <Region query={window} what="the log" lines={8}>
        {(data) => <Charts data={data} />}
      </Region>
    </section>
  )
}

const drawnWords = ({ rows, rowsPerPoint }: LogWindow) => (rowsPerPoint === 1 ? `every one of ${count(rows, 'row')}` : `least and greatest of each ${rowsPerPoint} of ${count(rows, 'row')}`)

function Charts({ data }: { data: LogWindow }) {
  const together = useId()
  return (
    <div className="mt-2 grid gap-y-3">
      {data.series.map((s) => (
        <Signal key={s.signal} series={s} from={data.from} to={data.to} together={together} />
      ))}
    </div>
  )
}

function Signal({ series: { signal, unit, drawn }, from, to, together }: { series: LogWindow['series'][number]; from: number; to: number; together: string }) {
  const series = useMemo(() => [{ label: signal, role: signal === 'set-point' ? ('set-point' as const) : ('measured' as const), x: drawn.x, y: drawn.y, stepped: signal === 'set-point' }], [signal, drawn])
  return <SeriesChart title={signal} level={3} x={{ label: 'time', unit: 's', min: from, max: to }} y={{ label: signal, unit }} series={series} height={120} together={together} hideLegend />
}

/** What is typed has to be a time inside the log; the whole of it is one press away. */
function StretchForm({ reading, stretch, onStretch }: { reading: LogReading; stretch: Stretch; onStretch: (stretch: Stretch) => void }) {
  const [from, setFrom] = useState(stretch.from === null ? '' : String(stretch.from))
  const [to, setTo] = useState(stretch.to === null ? '' : String(stretch.to))
  const [problem, setProblem] = useState<string | null>(null)
  const whole = `${formatNumber(reading.from, { digits: 4 })} to ${formatNumber(reading.to, { digits: 5 })} s`
  const show = () => {
    const read = [from, to].map((text) => (text.trim() === '' ? null : parseNumber(text)))
    const bad = read.find((r) => r?.kind === 'error')
    const [a, b] = read.map((r) => (r?.kind === 'number' ? r.value : null))
    const order = a !== null && b !== null && a >= b ? 'The end comes before the beginning.' : null
    const inside = [a, b].some((t) => t !== null && (t < reading.from || t > reading.to)) ? `The log goes from ${whole}.` : null
    const wrong = bad?.kind === 'error' ? bad.message : (order ?? inside)
    setProblem(wrong)
    if (wrong === null) onStretch({ from: a, to: b })
  }
  return (
    <form
      className="mt-2 flex flex-wrap items-end gap-x-3 gap-y-2"
      onSubmit={(e) => {
        e.preventDefault()
        show()
      }}
    >
      <TextField label="from" mono inputMode="decimal" unit="s" width={110} value={from} onChange={setFrom} />
      <TextField label="to" mono inputMode="decimal" unit="s" width={110} value={to} onChange={setTo} />
      <Button type="submit">Look closer</Button>
      {(stretch.from !== null || stretch.to !== null) && (
        <Button kind="link" onClick={() => onStretch({ from: null, to: null })}>
          the whole log
        </Button>
      )}
      <span className="text-12 text-ink-2">{whole}</span>
      {problem && <span role="alert" className="w-full text-13 text-oxide">{problem}</span>}
    </form>
  )
}
