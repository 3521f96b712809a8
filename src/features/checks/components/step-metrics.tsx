import type { ReactNode } from 'react'
import type { Finding, StepFigures } from '../../../../shared/contract/checks.ts'
import { HelpButton } from '../../../components/ui/help-button.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'

const unitOf = { position: 'rad', velocity: 'rad/s', current: 'A' } as const

interface Metric {
  name: string
  unit: string
  of: (s: StepFigures) => number | null
  /** words for null */
  none?: string
  /** kind of the finding that judges it */
  kind?: string
}

const metrics = (response: StepFigures['response']): Metric[] => [
  { name: 'rise, 10 to 90 %', unit: 's', of: (s) => s.riseTimeS, none: 'not reached' },
  { name: 'overshoot', unit: '%', of: (s) => s.overshootPercent, kind: 'overshoot' },
  { name: 'settling, 2 %', unit: 's', of: (s) => s.settlingTimeS, none: 'not inside', kind: 'settling' },
  { name: 'final error', unit: unitOf[response], of: (s) => s.finalError, kind: 'final error' },
  { name: 'peak current', unit: 'A', of: (s) => s.peakCurrentA },
  { name: 'RMS current', unit: 'A', of: (s) => s.rmsCurrentA },
  { name: 'peak request', unit: 'V', of: (s) => s.peakVoltageRequestV },
  { name: 'peak speed', unit: 'rad/s', of: (s) => s.peakSpeed },
  { name: 'ripple at the end', unit: unitOf[response], of: (s) => s.rippleOfResponse, kind: 'limit cycle' },
  { name: 'current ripple', unit: 'A', of: (s) => s.rippleOfCurrentA },
]

export interface StepMetricsProps {
  candidate: StepFigures | null
  released: StepFigures | null
  /** the candidate's at its worst corner */
  worst: StepFigures | null
  findings: readonly Finding[]
  base: string | null
}

/** Figures of the simulated step, before, after, and at the worst corner, beside what the policy asks. */
export function StepMetrics({ candidate, released, worst, findings, base }: StepMetricsProps) {
  const some = candidate ?? released
  if (!some) return null
  const title = <>Step of <Num value={some.stepTo} unit={unitOf[some.response]} /></>
  const cell = (s: StepFigures, m: Metric): ReactNode => {
    const value = m.of(s)
    return value === null ? m.none : <Num value={m.unit === '%' ? value.toFixed(1) : value} unit={m.unit} />
  }
  return (
    <section>
      <SectionHeading>{title}</SectionHeading>
      <div className="table-frame">
        <table className="table table-dense text-13" aria-label="figures of the step">
          <thead>
            <tr>
              <th scope="col" className="!px-0">Figure</th>
              {released && <th scope="col" className="end !px-1">{base ?? 'released'}</th>}
              {candidate && <th scope="col" className="end !px-1">candidate</th>}
              {worst && <th scope="col" className="end !px-1">at worst</th>}
              <th scope="col" className="end !px-1">policy</th>
            </tr>
          </thead>
          <tbody>
            {metrics(some.response).map((m) => {
              const judged = findings.find((f) => f.kind === m.kind && f.limit !== null)
              return (
                <tr key={m.name}>
                  <td role="rowheader" className="!px-0">
                    {m.name} <HelpButton topic={`figure:${m.name}`} about={m.name} />
                  </td>
                  {released && <td className="end !px-1">{cell(released, m)}</td>}
                  {candidate && <td className={`end !px-1 font-medium ${judged && judged.level !== 'pass' ? 'text-plum' : ''}`}>{cell(candidate, m)}</td>}
                  {worst && <td className="end !px-1">{cell(worst, m)}</td>}
                  <td className="end !px-1 text-ink-2">{judged?.limit !== null && judged ? <Num value={judged.limit} unit={judged.unit} /> : ''}</td>
                </tr>
              )
            })}
          </tbody>
        </table>
      </div>
    </section>
  )
}
