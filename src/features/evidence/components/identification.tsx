import { useQuery } from '@tanstack/react-query'
import { useMemo, useState } from 'react'
import type { EvidenceView, IdentificationView, IdentifiedLetter } from '../../../../shared/contract/evidence.ts'
import { SeriesChart } from '../../../components/charts/series-chart.tsx'
import { Region } from '../../../components/layout/region.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { formatNumber, parseNumber } from '../../../lib/format.ts'
import { identificationQuery } from '../queries.ts'
import { IdentifiedTable } from './identified-table.tsx'
import { UseDialog, type OwnDraft } from './use-dialog.tsx'

export interface IdentificationProps {
  log: EvidenceView
  against: string
  /** drafts of one's own on the machine, to write in */
  drafts: readonly OwnDraft[]
  onDrafted: (change: string) => void
}

/** What the log says of the drive train, with standard errors; taken over by choice into a draft. */
export function Identification({ log, against, drafts, onDrafted }: IdentificationProps) {
  const [T, setT] = useState(25)
  const [typed, setTyped] = useState('25')
  const [chosen, setChosen] = useState<ReadonlySet<IdentifiedLetter> | null>(null)
  const [using, setUsing] = useState(false)
  const query = useQuery(identificationQuery(log.machine, log.number, { against, T_winding: T }))
  const read = parseNumber(typed)
  const wrong = read.kind === 'error' ? read.message : read.value < -60 || read.value > 250 ? 'A winding is between −60 and 250 °C.' : null
  const letters = query.data ? (chosen ? query.data.values.filter((v) => v.edit && chosen.has(v.letter)) : query.data.values.filter((v) => v.edit)).map((v) => v.letter) : []
  return (
    <section aria-labelledby="identified" className="mb-8">
      <SectionHeading id="identified" aux={query.data && `beside ${query.data.modelOf}`}>
        Identified
      </SectionHeading>
      <form
        className="mt-2 flex flex-wrap items-end gap-3"
        onSubmit={(e) => {
          e.preventDefault()
          if (read.kind === 'number' && !wrong) setT(read.value)
        }}
      >
        <TextField label="winding during the run" unit="°C" mono inputMode="decimal" width={110} value={typed} onChange={setTyped} error={wrong} />
        <Button type="submit">Identify at it</Button>
      </form>
      <Region query={query} what="the identification" lines={7}>
        {(data) => (
          <>
            <div className="mt-2 grid grid-cols-[minmax(0,1fr)] gap-x-12 gap-y-4 xl:grid-cols-2">
              <div className="min-w-0">
                <IdentifiedTable values={data.values} chosen={new Set(letters)} onChoose={setChosen} />
                <p className="mt-1 text-12 text-ink-2">{foundBy(data)}</p>
                {data.repairs.length > 0 && <ul className="mt-1 text-13 text-ink-2">{data.repairs.map((r) => <li key={r}>{r}</li>)}</ul>}
                <div className="mt-3 flex flex-wrap items-center gap-3">
                  <Button kind="primary" unavailable={!log.may.use.allowed ? log.may.use.why : letters.length === 0 ? 'Choose a value that the log gives.' : null} onClick={() => setUsing(true)}>
                    Use these in the drive train…
                  </Button>
                  <span className="text-12 text-ink-2">as edits of a draft: nothing alters before it is checked, signed and released</span>
                </div>
              </div>
              <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-y-3">
                <Residual title="current or voltage not explained" part={data.electrical} />
                <Residual title="motion not explained" part={data.mechanical} />
              </div>
            </div>
            {using && <UseDialog log={log} letters={letters} values={data.values} T_winding={T} drafts={drafts} onDrafted={onDrafted} onClose={() => setUsing(false)} />}
          </>
        )}
      </Region>
    </section>
  )
}

const foundBy = ({ known, torqueConstant, rows, rate }: IdentificationView) =>
  `least squares over ${rows} rows at ${formatNumber(rate)} Hz, with N = ${formatNumber(known.N)}, η = ${formatNumber(known.eta)}, R_on = ${formatNumber(known.R_on)} Ω${torqueConstant === null ? '' : torqueConstant === 'given' ? '; torque by the drive train’s k_t' : '; torque by the identified k_e'}. Standard errors cover noise, not what the model leaves out.`

function Residual({ title, part }: { title: string; part: IdentificationView['electrical'] | IdentificationView['mechanical'] }) {
  const series = useMemo(() => (part.residual ? [{ label: 'residual', role: 'measured' as const, ...part.residual }] : []), [part])
  if (!part.residual) return null
  const slow = part.neighbourCorrelation > 0.9 ? ', its neighbours hang together: the model misses something slow' : ''
  return <SeriesChart title={title} level={3} aux={`RMS ${formatNumber(part.rms)} ${part.unit}${slow}`} x={{ label: 'time', unit: 's' }} y={{ label: 'residual', unit: part.unit }} series={series} height={110} hideLegend />
}
