import type { RowEffect } from '../../../../shared/contract/reviews.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { EffectRuler } from '../../../components/ui/effect-ruler.tsx'
import { formatNumber } from '../../../lib/format.ts'

const shown = (value: number | null, reads: string) => (value === null ? reads || '–' : formatNumber(value))

/** The stretch a ruler shows: margins from 0, anything else around its two figures. */
function rangeOf(figure: string, before: number, after: number): [number, number] {
  const most = Math.max(before, after)
  if (figure.includes('phase margin')) return [0, Math.max(90, most)]
  if (figure.includes('gain margin')) return [0, Math.max(30, most)]
  const spread = Math.abs(after - before) || Math.abs(after) || 1
  return [Math.min(before, after) - spread, most + spread]
}

/** What one altered value does alone, everything else as released: the figure that moves most, before and after, with policy's stop. */
export function EffectCell({ effect, nameOf, alone }: { effect: RowEffect | undefined; nameOf: (joint: string) => string; alone: boolean }) {
  if (!effect || effect.kind === 'not yet') return <span className="text-13 text-ink-2">{effect ? 'being computed' : ''}</span>
  if (effect.kind === 'none') return <span className="text-13 text-ink-2">{effect.why}</span>
  const { figure, loop, unit, joint, before, after, beforeReads, afterReads, verdict, policy } = effect.effect
  const missed = policy !== null && after !== null && (policy.forbidden === 'below' ? after < policy.limit : after > policy.limit)
  const name = [loop, figure].filter(Boolean).join(' ')
  return (
    <span className="inline-flex flex-wrap items-center gap-x-3 text-13">
      <span title={alone ? undefined : `most on ${nameOf(joint)}`}>{name}</span>
      <span className="whitespace-nowrap">
        <span className="num">{shown(before, beforeReads)}</span>
        <Arrow />
        <span className={`num font-medium ${verdict === 'unstable' ? 'text-oxide' : missed ? 'text-plum' : ''}`}>{shown(after, afterReads)}</span>
        {unit && after !== null && <span className="unit ml-[.22em]">{unit}</span>}
      </span>
      {before !== null && after !== null && <EffectRuler label={name} before={before} after={after} min={rangeOf(figure, before, after)[0]} max={rangeOf(figure, before, after)[1]} unit={unit} policy={policy ?? undefined} width={92} />}
    </span>
  )
}
