import { imOf, reOf, type LocusNode } from './locus-node.ts'

/** Loci below this modulus, or above its inverse, cross nothing within ±60 dB. */
export const NEGLIGIBLE = 5e-4
/** How far a locus may stray, in ln and rad (or relative to its size), from a straight line between nodes. */
const STRAY = 0.05
/** The same where it passes a threshold so closely that a crossing pair may hide between two nodes. */
const STRAY_GRAZING = 2e-5

/**
 * Whether every locus of interest runs straight between the ends, in ln λ or in λ itself.
 *
 * @param floor  modulus below which a locus is of no interest, at least NEGLIGIBLE
 */
export function straight(a: LocusNode, m: LocusNode, b: LocusNode, floor: number): boolean {
  const low = floor * floor
  for (let i = 0; i < a.q; i++) {
    const sa = squareOf(a, i)
    const sm = squareOf(m, i)
    const sb = squareOf(b, i)
    const small = NEGLIGIBLE * NEGLIGIBLE
    if (sa < low && sm < low && sb < low) continue
    if (sa * small > 1 && sm * small > 1 && sb * small > 1) continue
    if (!straightInLog(a, m, b, i) && !straightInPlane(a, m, b, i)) return false
  }
  return true
}

/** |λ_i|². */
const squareOf = (node: LocusNode, i: number): number => reOf(node, i) * reOf(node, i) + imOf(node, i) * imOf(node, i)

function straightInLog(a: LocusNode, m: LocusNode, b: LocusNode, i: number): boolean {
  const sa = squareOf(a, i)
  const sm = squareOf(m, i)
  const sb = squareOf(b, i)
  if (sa === 0 || sm === 0 || sb === 0) return false
  const mr = reOf(m, i)
  const mi = imOf(m, i)
  const first = turn(reOf(a, i), imOf(a, i), mr, mi)
  const second = turn(mr, mi, reOf(b, i), imOf(b, i))
  if (Math.abs(first) > 0.9 || Math.abs(second) > 0.9) return false
  const strayPhase = 0.5 * Math.abs(first - second)
  if (strayPhase > STRAY) return false
  const la = 0.5 * Math.log(sa)
  const lm = 0.5 * Math.log(sm)
  const lb = 0.5 * Math.log(sb)
  const strayModulus = Math.abs(lm - 0.5 * (la + lb))
  if (strayModulus > STRAY || Math.abs(lm - la) > 3 || Math.abs(lb - lm) > 3) return false
  if (strayModulus > STRAY_GRAZING && grazes(la, lm, lb, strayModulus)) return false
  if (strayPhase <= STRAY_GRAZING) return true
  const pm = fromMinusOne(mr, mi)
  return Math.abs(pm) > 2 || !grazes(pm - first, pm, pm + second, strayPhase)
}

/** For loci inside the unit circle that run through or beside 0, where the logarithm is of no use: window zeros. */
function straightInPlane(a: LocusNode, m: LocusNode, b: LocusNode, i: number): boolean {
  const most = Math.max(squareOf(a, i), squareOf(m, i), squareOf(b, i))
  if (most > 0.25) return false
  const size = Math.sqrt(most)
  const stray = Math.hypot(reOf(m, i) - 0.5 * (reOf(a, i) + reOf(b, i)), imOf(m, i) - 0.5 * (imOf(a, i) + imOf(b, i)))
  if (stray > STRAY * size) return false
  // Which side of 0 it passes decides a crossing of the negative axis: settled, or too small to matter.
  if (stray < 0.25 * NEGLIGIBLE) return true
  if (Math.min(toOrigin(a, m, i), toOrigin(m, b, i)) < 4 * stray) return false
  return !grazesBelow(imOf(a, i), imOf(m, i), imOf(b, i), stray, Math.min(reOf(a, i), reOf(m, i), reOf(b, i)))
}

function grazesBelow(a: number, m: number, b: number, stray: number, leftmost: number): boolean {
  return leftmost < 0 && grazes(a, m, b, stray)
}

/** Distance of 0 from the chord between two nodes of a locus. */
function toOrigin(a: LocusNode, b: LocusNode, i: number): number {
  const ar = reOf(a, i)
  const ai = imOf(a, i)
  const dr = reOf(b, i) - ar
  const di = imOf(b, i) - ai
  const length = dr * dr + di * di
  const t = length === 0 ? 0 : Math.min(1, Math.max(0, -(ar * dr + ai * di) / length))
  return Math.hypot(ar + t * dr, ai + t * di)
}

/** All three on one side of 0, and one nearer to it than the line may be off. */
function grazes(a: number, m: number, b: number, stray: number): boolean {
  if (a > 0 !== m > 0 || m > 0 !== b > 0) return false
  return Math.min(Math.abs(a), Math.abs(m), Math.abs(b)) < 4 * stray
}

/** Angle from x to y, in (−π, π]. */
function turn(xr: number, xi: number, yr: number, yi: number): number {
  return Math.atan2(xr * yi - xi * yr, xr * yr + xi * yi)
}

/** Angle of λ measured from −1, in (−π, π]. */
export function fromMinusOne(re: number, im: number): number {
  return Math.atan2(-im, -re)
}
