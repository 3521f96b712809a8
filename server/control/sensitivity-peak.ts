import type { MarginSource } from './loci.ts'
import { imOf, reOf, type LocusNode } from './locus-node.ts'
import { peakBetween, type PeakFound } from './peak-search.ts'

/** A peak over frequency. */
export interface Peak {
  /** Radians per period of the locus. */
  readonly psi: number
  readonly value: number
  readonly hz: number
}

/** |x + jy| of loop-sized numbers; Math.hypot guards against overflow at several times the cost. */
const modulus = (x: number, y: number): number => Math.sqrt(x * x + y * y)

/** A locus of settled nodes leaves its chord by at most this share of its modulus. */
const CHORD_ERROR = 0.06
const ROUNDING = 1e-3

/** Distance of −1 from the chord of locus i between two nodes. */
function toMinusOne(a: LocusNode, b: LocusNode, i: number): number {
  const ar = reOf(a, i) + 1
  const ai = imOf(a, i)
  const dr = reOf(b, i) + 1 - ar
  const di = imOf(b, i) - ai
  const length = dr * dr + di * di
  const t = length === 0 ? 0 : Math.min(1, Math.max(0, -(ar * dr + ai * di) / length))
  return modulus(ar + t * dr, ai + t * di)
}

/**
 * How far a locus may leave the chord before node k: no further than it leaves the chord over that interval and a neighbouring one, which is about four times as
 * far where the locus is smooth; and never more than settled nodes allow.
 */
function bulge(nodes: readonly LocusNode[], k: number, i: number): number {
  const a = nodes[k - 1]
  const b = nodes[k]
  const size = Math.max(modulus(reOf(a, i), imOf(a, i)), modulus(reOf(b, i), imOf(b, i)))
  if (k < 2 || k > nodes.length - 2) return CHORD_ERROR * size
  const seen = Math.max(offChord(nodes[k - 2], a, b, i), offChord(a, b, nodes[k + 1], i))
  return Math.min(CHORD_ERROR * size, seen + ROUNDING * size)
}

/** Distance of a locus at m from its chord from a to b. */
function offChord(a: LocusNode, m: LocusNode, b: LocusNode, i: number): number {
  const dr = reOf(b, i) - reOf(a, i)
  const di = imOf(b, i) - imOf(a, i)
  const mr = reOf(m, i) - reOf(a, i)
  const mi = imOf(m, i) - imOf(a, i)
  const length = dr * dr + di * di
  const t = length === 0 ? 0 : Math.min(1, Math.max(0, (mr * dr + mi * di) / length))
  return modulus(mr - t * dr, mi - t * di)
}

/** M_s: the largest 1/|1 + λ| over all loci, peaks between nodes included. */
export function sensitivityPeak(source: MarginSource, nodes: readonly LocusNode[], toHz: number): Peak {
  const { q } = source
  const re = new Float64Array(q)
  const im = new Float64Array(q)
  const most = (psi: number): number => {
    source.evaluate(psi, re, im)
    let least = Infinity
    for (let c = 0; c < q; c++) least = Math.min(least, (1 + re[c]) ** 2 + im[c] ** 2)
    return 1 / Math.sqrt(least)
  }
  let best = { psi: nodes[0].psi, value: 0 }
  for (const node of nodes) {
    for (let i = 0; i < q; i++) {
      const value = 1 / modulus(1 + reOf(node, i), imOf(node, i))
      if (value > best.value) best = { psi: node.psi, value }
    }
  }
  // Intervals by the least distance from −1 that their chords allow; those that cannot beat the best are left.
  const intervals: { readonly k: number; readonly allowed: number }[] = []
  for (let k = 1; k < nodes.length; k++) {
    let allowed = Infinity
    for (let i = 0; i < q; i++) {
      allowed = Math.min(allowed, toMinusOne(nodes[k - 1], nodes[k], i) - bulge(nodes, k, i))
    }
    intervals.push({ k, allowed })
  }
  intervals.sort((a, b) => a.allowed - b.allowed)
  for (const { k, allowed } of intervals) {
    if (allowed * best.value >= 1) break
    const peak = peakBetween(source.follow ? alongChords(source, nodes[k - 1], nodes[k], most) : most, nodes[k - 1].psi, nodes[k].psi)
    if (peak.value > best.value) best = peak
  }
  most(best.psi)
  let at = 0
  for (let c = 1; c < q; c++) if (Math.hypot(1 + re[c], im[c]) < Math.hypot(1 + re[at], im[at])) at = c
  return { ...best, hz: Math.abs(source.strongest(best.psi, re[at], im[at])) * toHz }
}

/** 1/|1 + λ| of the locus whose chord passes nearest to −1, followed without the others. */
function alongChords(source: MarginSource, a: LocusNode, b: LocusNode, all: (psi: number) => number): (psi: number) => number {
  let near = 0
  for (let i = 1; i < source.q; i++) if (toMinusOne(a, b, i) < toMinusOne(a, b, near)) near = i
  return (psi) => {
    const t = (psi - a.psi) / (b.psi - a.psi)
    const at = source.follow?.(psi, reOf(a, near) + t * (reOf(b, near) - reOf(a, near)), imOf(a, near) + t * (imOf(b, near) - imOf(a, near)))
    return at ? 1 / Math.hypot(1 + at.re, at.im) : all(psi)
  }
}

/** The norm peaks beside M_s, and is at least as high; from there and from nodes whose bound lets them be higher. */
export function liftedPeak(source: MarginSource, nodes: readonly LocusNode[], M_s: Peak, toHz: number): Peak {
  if (source.q === 1) return M_s
  const norm = (psi: number): number => source.sensitivityNorm(psi, 0)
  let best = climb(norm, M_s.psi, M_s.psi / (10 * M_s.value))
  const floor = best.value * 0.95
  // Where every eigenvalue is tiny or huge, S is near a projection and its norm near 1.
  const values = nodes.map((node) => (nearOne(node) ? source.sensitivityNorm(node.psi, floor) : 0))
  for (let k = 0; k < nodes.length; k++) {
    if (values[k] < floor) continue
    if (k > 0 && values[k - 1] > values[k]) continue
    if (k < nodes.length - 1 && values[k + 1] > values[k]) continue
    const low = nodes[Math.max(0, k - 1)].psi
    const high = nodes[Math.min(nodes.length - 1, k + 1)].psi
    if (low < best.psi && best.psi < high) continue
    const peak = peakBetween(norm, low, high)
    if (peak.value > best.value) best = peak
  }
  return { ...best, hz: (best.psi * toHz) / source.q }
}

function nearOne(node: LocusNode): boolean {
  for (let i = 0; i < node.q; i++) {
    const size = reOf(node, i) ** 2 + imOf(node, i) ** 2
    if (size > 1e-3 && size < 1e3) return true
  }
  return false
}

/** Peak of f near ψ: steps grow on both sides until f falls, then a search between. */
function climb(f: (psi: number) => number, psi: number, step: number): PeakFound {
  const top = f(psi)
  const reach = (direction: number): number => {
    let at = psi
    let last = top
    for (let h = step; h < Math.PI; h *= 2) {
      const next = Math.min(Math.PI, Math.max(psi * 1e-3, at + direction * h))
      const value = f(next)
      at = next
      if (value < last || next === Math.PI || next === psi * 1e-3) break
      last = value
    }
    return at
  }
  const peak = peakBetween(f, reach(-1), reach(1))
  return peak.value > top ? peak : { psi, value: top }
}
