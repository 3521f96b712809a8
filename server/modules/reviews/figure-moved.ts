import type { JointFigures, LoopFigures, LoopName } from '../../../shared/contract/checks.ts'
import type { PolicyContent } from '../../../shared/contract/policy.ts'
import type { ValueEffect } from '../../../shared/contract/reviews.ts'
import type { JointModel } from '../../control/model.ts'

type Figures = Omit<JointFigures, 'tolerance'>
export interface Side {
  figures: Figures
  model: JointModel
}
type Moved = Omit<ValueEffect, 'joint' | 'verdict'>
interface Scored {
  /** how far it moves, in shares of what is usual for it */
  score: number
  moved: Moved
}

const loops: readonly LoopName[] = ['position', 'velocity', 'current']
/** A margin's move that nobody could read off a Bode plot is none: 0.1° and 0.02 dB. */
const least = 0.1 / 45

const plain = (figure: string, unit: string, before: number | null, after: number | null, more: Partial<Moved> = {}): Moved => ({ figure, loop: null, unit, before, after, beforeReads: '', afterReads: '', policy: null, ...more })

/** A margin of twice what is usual is ample, however far beyond it moves. */
const ample = 2
/** No margin that the check computes is as large: 180° and 60 dB. */
const beyond = 8

/** A margin in shares of what is usual, up to so many; one without a number is none at all or beyond them. */
const shareOf = (value: number | null, reads: string, usual: number, upTo: number) => (value !== null ? Math.min(upTo, value / usual) : reads === 'unstable' ? 0 : upTo)

/** How far the loops' margins move, in shares of 45° and 8 dB, as the check weighs them. */
function marginMoves(before: Figures, after: Figures, policy: PolicyContent, upTo: number): Scored[] {
  const kinds = [
    { figure: 'phase margin', unit: '°', usual: 45, limit: policy.phaseMarginDeg.nominal, value: (f: LoopFigures) => f.phaseMarginDeg, reads: (f: LoopFigures) => f.phaseMarginReads },
    { figure: 'gain margin', unit: 'dB', usual: 8, limit: policy.gainMarginDb.nominal, value: (f: LoopFigures) => f.gainMarginDb, reads: (f: LoopFigures) => f.gainMarginReads },
  ]
  return loops.flatMap((loop) =>
    kinds.flatMap(({ figure, unit, usual, limit, value, reads }): Scored[] => {
      const [x, y] = [before.loops[loop], after.loops[loop]]
      if (!x || !y) return []
      const [a, b] = [value(x), value(y)]
      if (a === null && b === null) return []
      const score = Math.abs(shareOf(b, reads(y), usual, upTo) - shareOf(a, reads(x), usual, upTo))
      return [{ score, moved: plain(figure, unit, a, b, { loop, beforeReads: reads(x), afterReads: reads(y), policy: { limit, forbidden: 'below' } }) }]
    }),
  )
}

const ratio = (a: number, b: number) => (a > 0 && b > 0 ? Math.abs(Math.log(b / a)) : a === b ? 0 : 1)

/** What the clamps let through, at the output. */
function clampMoves({ model: a }: Side, { model: b }: Side): Scored[] {
  const torque = ({ plant, firmware }: JointModel) => plant.k_t * plant.N * plant.eta * firmware.I_max
  const of = (figure: string, unit: string, x: number, y: number): Scored[] => (x === y || Math.max(x, y) >= 1e300 ? [] : [{ score: ratio(x, y), moved: plain(figure, unit, x, y) }])
  return [
    ...(a.firmware.I_max === b.firmware.I_max ? [] : of('torque at the clamp', 'N·m', torque(a), torque(b))),
    ...of('speed at the clamp', 'rad/s', a.firmware.omega_max, b.firmware.omega_max),
    ...of('voltage at the clamp', 'V', a.firmware.d_max * a.environment.V_bus, b.firmware.d_max * b.environment.V_bus),
  ]
}

const bandwidthMoves = (before: Figures, after: Figures): Scored[] =>
  loops.flatMap((loop): Scored[] => {
    const [a, b] = [before.loops[loop]?.bandwidthHz ?? null, after.loops[loop]?.bandwidthHz ?? null]
    return a === null || b === null ? [] : [{ score: ratio(a, b), moved: plain('bandwidth', 'Hz', a, b, { loop }) }]
  })

function stepMoves({ step: a }: Figures, { step: b }: Figures, policy: PolicyContent, settlingTarget: number | null): Scored[] {
  if (!a || !b) return []
  const settles = (t: number | null) => (t === null ? 'does not settle' : '')
  const { settlingTimeS: s, peakCurrentA: i, overshootPercent: o } = a
  return [
    { score: s === null || b.settlingTimeS === null ? (s === b.settlingTimeS ? 0 : 1) : ratio(s, b.settlingTimeS), moved: plain('settling, 2 %', 's', s, b.settlingTimeS, { beforeReads: settles(s), afterReads: settles(b.settlingTimeS), policy: settlingTarget === null ? null : { limit: settlingTarget, forbidden: 'above' } }) },
    { score: Math.abs(b.overshootPercent - o) / 15, moved: plain('overshoot', '%', o, b.overshootPercent, { policy: { limit: policy.overshootPercent, forbidden: 'above' } }) },
    { score: ratio(i, b.peakCurrentA), moved: plain('peak current', 'A', i, b.peakCurrentA) },
  ]
}

const most = (scored: readonly Scored[], from: number): Scored | null => scored.filter((s) => s.score >= from).toSorted((a, b) => b.score - a.score)[0] ?? null

/**
 * The figure that one value moves most.
 *
 * A verdict that turns stands before everything. Then the loops' margins, those that are not ample first; where none moves, what the clamps let through; then bandwidths; then
 * the simulated step.
 *
 * @returns  the figure with how far it moved, by which joints are compared; null when nothing moves
 */
export function figureMoved(before: Side, after: Side, policy: PolicyContent, settlingTarget: number | null): (Scored & { verdict: Figures['verdict'] }) | null {
  const { verdict } = after.figures
  if (verdict !== before.figures.verdict) return { score: Infinity, verdict, moved: plain('verdict', '', null, null, { beforeReads: before.figures.verdict, afterReads: verdict }) }
  const found =
    most(marginMoves(before.figures, after.figures, policy, ample), least) ??
    most(marginMoves(before.figures, after.figures, policy, beyond), least) ??
    most(clampMoves(before, after), 1e-6) ??
    most(bandwidthMoves(before.figures, after.figures), 0.005) ??
    most(stepMoves(before.figures, after.figures, policy, settlingTarget), 0.005)
  return found && { ...found, verdict }
}
