import type { DiffRow, RowEffect, ValueEffect } from '../../../../shared/contract/reviews.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { EffectRuler } from '../../../components/ui/effect-ruler.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { figureName, missesPolicy, rangeOf, shownEffect } from '../figure-words.ts'
import { OriginChange } from './diff-side.tsx'

/** The effect of one value alone: the figure that moves most, before and after, with its ruler. Where the origin alters, that too. */
export function EffectCell({ effect, row = null }: { effect: RowEffect | undefined; row?: DiffRow | null }) {
  return (
    <span className="inline-flex w-full flex-wrap items-center gap-x-3">
      {row && <OriginChange row={row} />}
      {effect?.kind === 'effect' && <Moved effect={effect.effect} />}
      {effect?.kind === 'none' && row?.register !== null && !(row && originAlone(row)) && <span className="text-13 text-ink-2">{effect.why}</span>}
      {effect?.kind === 'not yet' && <span className="text-13 text-ink-2">being computed</span>}
    </span>
  )
}

const originAlone = (row: DiffRow) => row.before !== null && row.before.value === row.after?.value

function Moved({ effect }: { effect: ValueEffect }) {
  if (effect.figure === 'verdict')
    return (
      <span className="inline-flex items-center text-13">
        {effect.beforeReads}
        <Arrow />
        <VerdictMark verdict={effect.verdict} size={15} />
      </span>
    )
  const { before, after, unit } = shownEffect(effect)
  const range = rangeOf(effect)
  const missed = missesPolicy(effect)
  return (
    <span className="inline-grid w-full grid-cols-[minmax(86px,auto)_minmax(max-content,1fr)_auto] items-center gap-x-[6px] text-13">
      <span className="whitespace-nowrap">{figureName(effect)}</span>
      <span className="whitespace-nowrap">
        <span className="num">{before}</span>
        <Arrow />
        <b className={`num ${missed ? 'text-plum' : ''}`}>{after}</b>
        <span className="unit"> {unit}</span>
        {missed && <span className="sr-only">, outside policy</span>}
        {effect.verdict !== 'stable' && <VerdictMark verdict={effect.verdict} size={13} className="ml-2" />}
      </span>
      {range && effect.after !== null && <EffectRuler label={`${figureName(effect)} by this value alone`} before={effect.before} after={effect.after} min={range.min} max={range.max} scale={range.scale} unit={effect.unit} policy={effect.policy ?? undefined} width={58} />}
    </span>
  )
}
