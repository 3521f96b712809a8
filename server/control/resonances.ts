import type { Stability } from './stability.ts'

/** Angles of eigenvalues that ring: where a locus or T may have something narrow, and its flanks. */
export function resonances(stability: Stability): number[] {
  const marks: number[] = []
  for (let k = 0; k < stability.re.length; k++) {
    const re = stability.re[k]
    const im = stability.im[k]
    const modulus = Math.hypot(re, im)
    if (im <= 0 || modulus < 0.6) continue
    const angle = Math.atan2(im, re)
    const width = Math.abs(1 - modulus)
    for (const at of [angle - width, angle, angle + width]) if (at > 0 && at < Math.PI) marks.push(at)
  }
  return marks
}

/** ψ = ±q·θ mod 2π: every θ in (0, π) that folds onto the marks. */
export function unfold(marks: readonly number[], q: number): number[] {
  if (q === 1) return [...marks]
  const out: number[] = []
  for (const psi of marks) {
    for (let m = 0; m < q; m++) {
      for (const at of [(psi + 2 * Math.PI * m) / q, (2 * Math.PI * (m + 1) - psi) / q]) if (at > 0 && at < Math.PI) out.push(at)
    }
  }
  return out
}
