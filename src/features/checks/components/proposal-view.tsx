import { loopNames, type JointCheck } from '../../../../shared/contract/checks.ts'
import { type Proposal } from '../../../../shared/contract/proposals.ts'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import { fromPointer } from '../../../../shared/parameters/paths.ts'
import { Num } from '../../../components/ui/num.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { count } from '../../../lib/format.ts'
import { figuresOf } from '../figures.ts'
import { letters } from '../letters.ts'
import { BeforeAfter } from './before-after.tsx'
import { FigureRows } from './figure-rows.tsx'
import { FindingList } from './finding-list.tsx'

const text = (v: unknown) => (typeof v === 'number' || typeof v === 'string' ? String(v) : v === undefined ? 'nothing' : JSON.stringify(v))

export interface ProposalViewProps {
  proposal: Omit<Proposal, 'findings'> & Partial<Pick<Proposal, 'findings'>>
  /** the joint as the draft has it, to compare with */
  joint: JointCheck
  nameOf: (joint: string) => string
}

/** What is proposed: each gain with its rule, the edits, and the check with them made. */
export function ProposalView({ proposal, joint, nameOf }: ProposalViewProps) {
  const findings = proposal.findings ?? []
  const check: JointCheck = { joint: proposal.joint, touched: true, candidate: proposal.figures, released: joint.candidate, imageSha256: null }
  const figures = figuresOf(check, findings).filter((f) => f.name === 'phase' || f.name === 'gain' || f.name === 'bandwidth')
  const others = proposal.reaches.filter((j) => j !== proposal.joint)
  return (
    <div className="grid gap-4">
      <div className="table-frame">
        <table className="table table-dense text-13" aria-label="gains proposed">
          <tbody>
            {proposal.rules.map((r) => (
              <tr key={r.gain}>
                <td role="rowheader">{letters[r.gain]?.words ?? r.gain}</td>
                <td className="end"><Num value={r.value} unit={r.unit} digits={4} /></td>
                <td className="text-ink-2">{r.rule}<br /><span className="text-12">{r.source}</span></td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      <div>
        <p className="label">Edits</p>
        {proposal.edits.length === 0 ? <p className="text-13 text-ink-2">None: the draft holds these values already.</p> : <EditList edits={proposal.edits} />}
        {others.length > 0 && <p className="help">The values are the family's: they reach {count(others.length, 'other joint')} too ({others.map(nameOf).join(', ')}).</p>}
      </div>
      <div>
        <p className="label">Check with them, beside the draft as it stands</p>
        <p className="flex flex-wrap items-center gap-x-4 text-13">
          <VerdictMark verdict={proposal.figures.verdict} size={18} />
          <span>ρ <BeforeAfter before={joint.candidate ? joint.candidate.rho.toFixed(5) : null} after={proposal.figures.rho.toFixed(5)} className="num" /></span>
        </p>
        <FigureRows figures={figures} label="margins with the values proposed" />
        <WorstMargins now={proposal.figures} then={joint.candidate} />
        {findings.length > 0 && <div className="mt-2"><FindingList findings={findings} nameOf={nameOf} narrow /></div>}
      </div>
    </div>
  )
}

/** Margins at the worst corner, where the corners were walked. */
function WorstMargins({ now, then }: { now: Proposal['figures']; then: Proposal['figures'] | null }) {
  const swept = now.tolerance
  if (!swept) return null
  return (
    <ul className="mt-2 text-13" aria-label="margins at the worst corner">
      {loopNames.flatMap((loop) => {
        const after = swept.loops[loop]
        const before = then?.tolerance?.loops[loop]
        if (!after) return []
        return [
          <li key={loop}>
            {loop}, worst corner: <BeforeAfter before={before?.phaseMarginDeg?.value.toFixed(1) ?? null} after={after.phaseMarginDeg?.value.toFixed(1) ?? 'none'} unit="°" />°,{' '}
            <BeforeAfter before={before?.gainMarginDb?.value.toFixed(1) ?? null} after={after.gainMarginDb?.value.toFixed(1) ?? 'over 60'} /> dB
          </li>,
        ]
      })}
    </ul>
  )
}

export function EditList({ edits }: { edits: readonly Edit[] }) {
  return (
    <ul className="text-13" aria-label="edits">
      {edits.map((e) => (
        <li key={e.pointer} className="flex flex-wrap justify-between gap-x-4 border-t border-hairline py-1">
          <span>
            {fromPointer(e.pointer).at(-1)} <span className="text-12 text-ink-2">{fromPointer(e.pointer).slice(0, 2).join(' ')}</span>
          </span>
          <BeforeAfter before={text(e.from)} after={text(e.to)} className="num" />
        </li>
      ))}
    </ul>
  )
}
