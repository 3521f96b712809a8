import type { CheckView, JointCheck } from '../../../../shared/contract/checks.ts'
import { EffectRuler } from '../../../components/ui/effect-ruler.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { count } from '../../../lib/format.ts'
import { figuresOf, worstOf } from '../figures.ts'
import { BeforeAfter } from './before-after.tsx'

/** Figures in the line; the full report has them all. */
const MOST = 4

/** What the altered values do all together: verdict, ρ, and the margins that moved or miss policy, of the worst joint among those given. */
export function AllTogether({ check, joints, nameOf }: { check: CheckView; joints: readonly string[]; nameOf: (joint: string) => string }) {
  const among: JointCheck[] = check.joints.filter((j) => joints.includes(j.joint))
  const worst = worstOf(among)
  if (!worst?.candidate) return null
  const figures = figuresOf(worst, check.findings).filter((f) => f.name !== 'sensitivity peak' && (f.name !== 'bandwidth' || f.loop === 'velocity') && (f.before !== f.after || f.beforeReads !== f.afterReads || f.missed)).toSorted((a, b) => Number(b.missed) - Number(a.missed)).slice(0, MOST)
  return (
    <div className="flex flex-wrap border-b border-ink">
      <div className="min-w-[150px] px-[10px] py-3">
        <p className="font-medium">All together</p>
        <VerdictMark verdict={worst.candidate.verdict} className="mt-1" />
        <p className="mt-1 text-12 text-ink-2">{among.length > 1 ? `${nameOf(worst.joint)}, worst of ${count(among.length, 'joint')}` : nameOf(worst.joint)}</p>
      </div>
      <Cell title="ρ of one hyperperiod">
        <BeforeAfter before={worst.released ? worst.released.rho.toFixed(5) : null} after={worst.candidate.rho.toFixed(5)} className="num text-16" />
      </Cell>
      {figures.map((f) => (
        <Cell key={`${f.loop} ${f.name}`} title={`${f.loop} ${f.name === 'bandwidth' ? f.name : `${f.name} margin`}`} note={f.policy === null ? undefined : `policy ${f.policy}`}>
          <BeforeAfter before={f.before ?? f.beforeReads} after={f.after ?? f.afterReads} unit={f.unit} className={`text-16 ${f.missed ? 'text-plum' : ''}`} />
          {f.after !== null && (
            <EffectRuler label={`${f.loop} ${f.name}`} before={f.before} after={f.after} min={f.range[0]} max={f.range[1]} unit={f.unit} scale={f.unit === 'Hz' ? 'log' : 'linear'} policy={f.policy === null ? undefined : { limit: f.policy, forbidden: 'below' }} width={108} />
          )}
        </Cell>
      ))}
    </div>
  )
}

function Cell({ title, note, children }: { title: string; note?: string; children: React.ReactNode }) {
  return (
    <div className="border-l border-hairline px-3 py-3">
      <p className="text-13 text-ink-2">{title}</p>
      {children}
      {note && <p className="text-12 text-ink-2">{note}</p>}
    </div>
  )
}
