import { traceLoci, type LocusWatch, type MarginSource } from './loci.ts'
import { imOf, reOf, type LocusNode } from './locus-node.ts'
import { fromMinusOne, NEGLIGIBLE } from './locus-straightness.ts'
import { liftedPeak, sensitivityPeak, type Peak } from './sensitivity-peak.ts'

/** Gain margins are searched this far, up and down. */
export const GAIN_LIMIT_DB = 60

export type GainMargin =
  | { readonly kind: 'unstable' }
  | { readonly kind: 'none-within'; readonly limitDb: number }
  | { readonly kind: 'margin'; readonly factor: number; readonly gainMarginDb: number; readonly hz: number }

export type PhaseMargin =
  | { readonly kind: 'unstable' }
  | { readonly kind: 'none-up-to'; readonly limitDeg: 180 }
  | { readonly kind: 'margin'; readonly phaseMarginDeg: number; readonly hz: number }

export type DelayMargin =
  | { readonly kind: 'unstable' }
  | { readonly kind: 'none' }
  | { readonly kind: 'margin'; readonly delay: number; readonly ticks: number; readonly crossoverHz: number }

export type SensitivityPeak =
  | { readonly kind: 'unstable' }
  | { readonly kind: 'not-asked' }
  | { readonly kind: 'peak'; readonly value: number; readonly hz: number }

export interface LoopMargins {
  readonly gainUp: GainMargin
  readonly gainDown: GainMargin
  readonly phase: PhaseMargin
  readonly delay: DelayMargin
  readonly M_s: SensitivityPeak
  readonly Ms_lifted_norm: SensitivityPeak
}

export const UNSTABLE_MARGINS: LoopMargins = {
  gainUp: { kind: 'unstable' },
  gainDown: { kind: 'unstable' },
  phase: { kind: 'unstable' },
  delay: { kind: 'unstable' },
  M_s: { kind: 'unstable' },
  Ms_lifted_norm: { kind: 'unstable' },
}

interface Crossing {
  readonly psi: number
  readonly re: number
  readonly im: number
}

/**
 * All margins of a loop that is stable as it stands, from the loci of its lifted transfer.
 *
 * @param source  the broken loop
 * @throws        NumericError no-convergence from the tracer
 * @accuracy      1e-6 dB and 1e-6° against perturbing Φ (margins.test.ts)
 * @source        control-model.md §4
 */
export function marginsOf(source: MarginSource, wanted: 'gain-and-phase' | 'all' = 'all'): LoopMargins {
  const finder = new CrossingFinder(source)
  const nodes = traceLoci(source, finder)
  const { onCircle, candidates } = finder
  const onAxis = [...endpoints(nodes), ...finder.contenders(candidates)]
  const toHz = 1 / (2 * Math.PI * source.period)
  const trueHz = (x: Crossing): number => Math.abs(source.strongest(x.psi, x.re, x.im)) * toHz
  const phase = phaseMargin(onCircle, trueHz)
  const all = wanted === 'all'
  const M_s = all ? sensitivityPeak(source, nodes, toHz) : null
  const lifted = M_s ? liftedPeak(source, nodes, M_s, toHz) : null
  return {
    gainUp: gainMargin(onAxis, 'up', trueHz),
    gainDown: gainMargin(onAxis, 'down', trueHz),
    phase,
    delay: delayMargin(source, onCircle, toHz),
    M_s: tagged(M_s),
    Ms_lifted_norm: tagged(lifted),
  }
}

function tagged(peak: Peak | null): SensitivityPeak {
  return peak ? { kind: 'peak', value: peak.value, hz: peak.hz } : { kind: 'not-asked' }
}

function gainMargin(crossings: readonly Crossing[], direction: 'up' | 'down', trueHz: (x: Crossing) => number): GainMargin {
  const limit = 10 ** (GAIN_LIMIT_DB / 20)
  let best: Crossing | null = null
  let factor = direction === 'up' ? limit : 1 / limit
  for (const x of crossings) {
    const g = 1 / Math.hypot(x.re, x.im)
    if (direction === 'up' ? g > 1 && g <= factor : g < 1 && g >= factor) {
      factor = g
      best = x
    }
  }
  if (!best) return { kind: 'none-within', limitDb: direction === 'up' ? GAIN_LIMIT_DB : -GAIN_LIMIT_DB }
  return { kind: 'margin', factor, gainMarginDb: 20 * Math.log10(factor), hz: trueHz(best) }
}

function phaseMargin(crossings: readonly Crossing[], trueHz: (x: Crossing) => number): PhaseMargin {
  let best: Crossing | null = null
  let least = Infinity
  for (const x of crossings) {
    const angle = Math.abs(fromMinusOne(x.re, x.im))
    if (angle < least) {
      least = angle
      best = x
    }
  }
  if (!best) return { kind: 'none-up-to', limitDeg: 180 }
  return { kind: 'margin', phaseMarginDeg: (least * 180) / Math.PI, hz: trueHz(best) }
}

function delayMargin(source: MarginSource, crossings: readonly Crossing[], toHz: number): DelayMargin {
  let ticks = Infinity
  let hz = 0
  for (const x of crossings) {
    const theta = source.strongest(x.psi, x.re, x.im)
    if (theta === 0) continue
    // A component at −ω is the mirror image of one at ω: take the locus' conjugate.
    const angle = fromMinusOne(x.re, theta < 0 ? -x.im : x.im)
    const lag = angle <= 0 ? angle + 2 * Math.PI : angle
    const wait = lag / Math.abs(theta)
    if (wait < ticks) {
      ticks = wait
      hz = Math.abs(theta) * toHz
    }
  }
  if (ticks === Infinity) return { kind: 'none' }
  return { kind: 'margin', delay: ticks * source.period, ticks, crossoverHz: hz }
}

/** Real negative values at the ends of the frequency range, where a locus meets its mirror image. */
function endpoints(nodes: readonly LocusNode[]): Crossing[] {
  const found: Crossing[] = []
  const first = nodes[0]
  const next = nodes[1]
  const last = nodes[nodes.length - 1]
  for (let i = 0; i < last.q; i++) {
    if (reOf(last, i) < 0 && Math.abs(imOf(last, i)) <= 1e-9 * -reOf(last, i)) found.push({ psi: last.psi, re: reOf(last, i), im: imOf(last, i) })
    const flat = Math.abs(Math.hypot(reOf(next, i), imOf(next, i)) / Math.hypot(reOf(first, i), imOf(first, i)) - 1) < 0.01
    if (reOf(first, i) < 0 && flat && Math.abs(imOf(first, i)) < 1e-3 * -reOf(first, i)) found.push({ psi: first.psi, re: reOf(first, i), im: imOf(first, i) })
  }
  return found
}

const ROOT_STEPS = 80
/** A chord between settled nodes tells a crossing's size at least this well. */
const CONTENDER = 1.3

/** Where locus i crosses the negative axis, and the modulus there about. */
interface Span {
  readonly a: LocusNode
  readonly b: LocusNode
  readonly i: number
  readonly about: number
}

/**
 * A locus this much below a crossing already found, which is the gain margin's at least, can neither cross the axis before it nor reach the unit
 * circle, but for a peak of 18 dB between nodes: and what peaks so sharply rings, and is a landmark.
 */
const BELOW_CROSSING = 1 / 8
const HIGHEST_FLOOR = 0.05

/** Finds, while the loci are traced, where they meet the unit circle or the negative real axis. */
class CrossingFinder implements LocusWatch {
  floor = NEGLIGIBLE
  readonly candidates: Span[] = []
  readonly onCircle: Crossing[] = []
  private readonly source: MarginSource
  private readonly re: Float64Array
  private readonly im: Float64Array

  constructor(source: MarginSource) {
    this.source = source
    this.re = new Float64Array(source.q)
    this.im = new Float64Array(source.q)
  }

  enough(left: LocusNode, right: LocusNode): boolean {
    for (let i = 0; i < this.source.q; i++) this.between(left, right, i)
    return false
  }

  private between(a: LocusNode, b: LocusNode, i: number): void {
    const ar = reOf(a, i)
    const ai = imOf(a, i)
    const br = reOf(b, i)
    const bi = imOf(b, i)
    const ma = ar * ar + ai * ai
    const mb = br * br + bi * bi
    if (ma > 1 !== mb > 1) this.onCircle.push(this.root(a, b, i, 'circle'))
    // The real axis lies between them where their imaginary parts differ in sign; its negative half, where they face each other there.
    if (ai < 0 === bi < 0) return
    const pa = fromMinusOne(ar, ai)
    const pb = fromMinusOne(br, bi)
    if (Math.abs(pa - pb) < Math.PI) {
      const t = pa === pb ? 0.5 : pa / (pa - pb)
      const about = Math.sqrt(ma) ** (1 - t) * Math.sqrt(mb) ** t
      this.candidates.push({ a, b, i, about })
      if (about < 1) this.floor = Math.max(this.floor, Math.min(HIGHEST_FLOOR, about * BELOW_CROSSING))
    }
  }

  /** Crossings of the negative axis that may be the first on either side of −1, by their size as the chord shows it. */
  contenders(candidates: readonly Span[]): Crossing[] {
    let below = 0
    let above = Infinity
    for (const { about } of candidates) {
      if (about < 1) below = Math.max(below, about)
      else above = Math.min(above, about)
    }
    return candidates
      .filter(({ about }) => (about > below / CONTENDER && about < CONTENDER) || (about < above * CONTENDER && about > 1 / CONTENDER))
      .map(({ a, b, i }) => this.root(a, b, i, 'axis'))
  }

  /** Illinois' variant of regula falsi in ψ, halved when it stalls. */
  private root(a: LocusNode, b: LocusNode, i: number, line: 'circle' | 'axis'): Crossing {
    const value = (re: number, im: number): number => (line === 'circle' ? Math.log(Math.hypot(re, im)) : fromMinusOne(re, im))
    let left: Crossing = { psi: a.psi, re: reOf(a, i), im: imOf(a, i) }
    let right: Crossing = { psi: b.psi, re: reOf(b, i), im: imOf(b, i) }
    let fl = value(left.re, left.im)
    let fr = value(right.re, right.im)
    let side = 0
    let best = Math.abs(fl) < Math.abs(fr) ? left : right
    for (let step = 0; step < ROOT_STEPS; step++) {
      if (right.psi - left.psi <= 4e-16 * right.psi || fl === fr) break
      let psi = step % 8 === 7 ? 0.5 * (left.psi + right.psi) : (left.psi * fr - right.psi * fl) / (fr - fl)
      if (!(psi > left.psi && psi < right.psi)) psi = 0.5 * (left.psi + right.psi)
      const point = this.near(psi, left, right)
      const f = value(point.re, point.im)
      best = point
      if (Math.abs(f) < 1e-11) break
      if (f > 0 === fr > 0) {
        right = point
        fr = f
        if (side === -1) fl /= 2
        side = -1
      } else {
        left = point
        fl = f
        if (side === 1) fr /= 2
        side = 1
      }
    }
    return best
  }

  /** The locus at ψ nearest to the line between its two known points. */
  private near(psi: number, left: Crossing, right: Crossing): Crossing {
    const t = (psi - left.psi) / (right.psi - left.psi)
    const wr = left.re + t * (right.re - left.re)
    const wi = left.im + t * (right.im - left.im)
    const followed = this.source.follow?.(psi, wr, wi)
    if (followed) return { psi, re: followed.re, im: followed.im }
    this.source.evaluate(psi, this.re, this.im)
    let best = 0
    let least = Infinity
    for (let k = 0; k < this.re.length; k++) {
      const d = (this.re[k] - wr) ** 2 + (this.im[k] - wi) ** 2
      if (d < least) {
        least = d
        best = k
      }
    }
    return { psi, re: this.re[best], im: this.im[best] }
  }
}
