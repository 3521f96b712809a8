import { useQuery } from '@tanstack/react-query'
import { EffectRuler } from '../../../components/ui/effect-ruler.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { figuresOf, worstOf } from '../figures.ts'
import { checkNowQuery } from '../queries.ts'
import { BeforeAfter } from './before-after.tsx'

/** A check in a few lines, on the desk: verdict, ρ, the margins that moved, what is outside policy. Nothing while it is computed or when it fails; the review shows that. */
export function CheckBrief({ change }: { change: string }) {
  const check = useQuery(checkNowQuery(change)).data
  if (!check) return null
  const worst = worstOf(check.joints.filter((j) => j.touched))
  const moved = worst ? figuresOf(worst, check.findings).filter((f) => (f.name === 'phase' || f.name === 'gain') && f.before !== f.after).slice(0, 2) : []
  const level = check.counts.block > 0 ? 'block' : check.counts['concession needed'] > 0 ? 'concession needed' : check.counts.advise > 0 ? 'advise' : 'pass'
  return (
    <div className="flex flex-wrap items-start gap-x-8 gap-y-3 text-13">
      <div className="grid min-w-[180px] content-start gap-1">
      {check.verdict && <VerdictMark verdict={check.verdict} size={18} />}
      {worst?.candidate && (
        <p>
          <span className="text-ink-2">ρ </span>
          <BeforeAfter before={worst.released ? worst.released.rho.toFixed(5) : null} after={worst.candidate.rho.toFixed(5)} className="num" />
        </p>
      )}
        <p>
          <FindingMark level={level} size={15}>
            {level === 'pass' ? 'nothing outside policy' : `${check.counts[level]} ${level}`}
          </FindingMark>
        </p>
      </div>
      {moved.length > 0 && (
        <div className="grid content-start gap-2">
          {moved.map((f) => (
            <div key={`${f.loop} ${f.name}`}>
              <p>
                <span className="text-ink-2">
                  {f.loop} {f.name}{' '}
                </span>
                <BeforeAfter before={f.before ?? f.beforeReads} after={f.after ?? f.afterReads} unit={f.unit} className={f.missed ? 'text-plum' : ''} />
              </p>
              {f.after !== null && <EffectRuler label={`${f.loop} ${f.name}`} before={f.before} after={f.after} min={f.range[0]} max={f.range[1]} unit={f.unit} policy={f.policy === null ? undefined : { limit: f.policy, forbidden: 'below' }} width={144} />}
            </div>
          ))}
        </div>
      )}
    </div>
  )
}
