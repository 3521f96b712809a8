import { loopNames, type CheckView, type JointCheck, type JointFigures, type LoopName } from '../../../../shared/contract/checks.ts'
import { PolePlot } from '../../../components/charts/pole-plot.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Table, type Column } from '../../../components/ui/table.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { figuresOf } from '../figures.ts'
import { BeforeAfter } from './before-after.tsx'
import { FigureRows } from './figure-rows.tsx'

const brokenAt: Record<LoopName, string> = { current: 'broken at u', velocity: 'broken at i ref', position: 'broken at ω ref' }

/** Everything the check computed for one joint. */
export function JointReport({ joint, check, nameOf, base }: { joint: JointCheck; check: CheckView; nameOf: (joint: string) => string; base: string | null }) {
  const { candidate, released } = joint
  if (!candidate) return <p className="text-ink-2">Nothing was computed for {nameOf(joint.joint)}; the findings say why.</p>
  const figures = figuresOf(joint, check.findings)
  const loops = loopNames.filter((l) => figures.some((f) => f.loop === l))
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-x-10 gap-y-6 lg:grid-cols-2 xl:grid-cols-3">
      {loops.map((loop) => (
        <section key={loop}>
          <SectionHeading aux={brokenAt[loop]}>{`${loop[0].toUpperCase()}${loop.slice(1)} loop`}</SectionHeading>
          <FigureRows figures={figures.filter((f) => f.loop === loop)} label={`${loop} loop of ${nameOf(joint.joint)}`} oneLoop />
        </section>
      ))}
      <section>
        <SectionHeading aux={joint.touched ? (base ? `against ${base}` : 'no release before') : 'not touched by this change'}>Closed loop</SectionHeading>
        <VerdictMark verdict={candidate.verdict} size={30} className="mt-2 text-20 font-medium" />
        <KeyValueList className="mt-2" entries={closedLoop(candidate, joint.touched ? released : null)} />
        {joint.imageSha256 && (
          <p className="mt-2 text-13 text-ink-2">
            image <Hash hash={joint.imageSha256} bytes={8} />
          </p>
        )}
      </section>
      <PolePlot
        aux={`largest ${candidate.rho.toFixed(6)}`}
        hideLegend={!joint.touched || released === null}
        sets={[
          ...(joint.touched && released ? [{ label: base ? `released ${base}` : 'released', role: 'released' as const, poles: released.eigenvalues }] : []),
          { label: 'candidate', role: 'candidate' as const, poles: candidate.eigenvalues },
        ]}
        note={<>Upper half. Frequencies are known only modulo <Num value={1 / candidate.hyperperiodS} unit="Hz" digits={4} />.</>}
      />
      <section>
        <SectionHeading aux="slowest first">Modes</SectionHeading>
        <Modes figures={candidate} />
      </section>
    </div>
  )
}

function closedLoop(candidate: JointFigures, released: JointFigures | null) {
  const ms = (s: number | null | undefined) => (s === null || s === undefined ? null : s * 1e3)
  return [
    { key: 'ρ of one hyperperiod', value: <BeforeAfter before={released ? released.rho.toFixed(6) : null} after={candidate.rho.toFixed(6)} className="num" /> },
    { key: 'hyperperiod', value: <Num value={candidate.hyperperiodS} unit="s" digits={4} /> },
    { key: 'decay rate', value: <BeforeAfter before={released?.decayRate ?? null} after={candidate.decayRate} unit="1/s" /> },
    { key: 'slowest time constant', value: <BeforeAfter before={ms(released?.slowestTimeConstantS)} after={ms(candidate.slowestTimeConstantS) ?? 'does not decay'} unit="ms" /> },
  ]
}

type Mode = JointFigures['eigenvalues'][number]

const modeColumns: Column<Mode>[] = [
  { key: 're', head: 'Real', decimal: (m) => m.re.toFixed(5) },
  { key: 'im', head: 'Imaginary', decimal: (m) => m.im.toFixed(5) },
  { key: 'decay', head: 'Decay', unit: '1/s', align: 'end', cell: (m) => <Num value={m.decayRate} /> },
  { key: 'frequency', head: 'Frequency', unit: 'Hz', align: 'end', cell: (m) => <Num value={m.frequencyHz} /> },
]

function Modes({ figures }: { figures: JointFigures }) {
  const modes = figures.eigenvalues.filter((m) => m.im >= 0).toSorted((a, b) => a.decayRate - b.decayRate)
  return <Table label="modes of the closed loop" dense rows={modes} columns={modeColumns} rowKey={(m) => `${m.re} ${m.im}`} empty="The loop has no state that decays." />
}
