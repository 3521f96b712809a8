import { findingLevels, type Finding, type FindingLevel } from '../../../../shared/contract/checks.ts'

/** A finding before it is folded: about one joint, or about what `place` names. */
export type RawFinding = Omit<Finding, 'key' | 'joints'> & { place: string; joint?: string }

export const rank = (level: FindingLevel) => findingLevels.indexOf(level)

/**
 * One finding for each kind, loop and place (a family, a bus): the worst of its joints speaks for all at that level.
 *
 * A concession names the key, so it stays the same while values move within a level.
 */
export function fold(raw: readonly RawFinding[]): Finding[] {
  const groups = new Map<string, RawFinding[]>()
  for (const f of raw) {
    const key = [f.kind, f.loop, f.place].filter(Boolean).join('/')
    const group = groups.get(key)
    if (group) group.push(f)
    else groups.set(key, [f])
  }
  const folded = [...groups].map(([key, list]): Finding => {
    const level = findingLevels[Math.max(...list.map((f) => rank(f.level)))]
    const atLevel = list.filter((f) => f.level === level)
    // Of those that miss, the one that misses by most; of those that pass, the one nearest to its limit.
    const further = level === 'pass' ? -1 : 1
    const { place: _place, joint: _joint, ...worst } = atLevel.reduce((a, b) => (further * (distance(b) - distance(a)) > 0 ? b : a))
    return { ...worst, key, joints: [...new Set(atLevel.flatMap((f) => (f.joint ? [f.joint] : [])))] }
  })
  return folded.sort((a, b) => rank(b.level) - rank(a.level) || a.key.localeCompare(b.key))
}

/** How far a figure lies from its limit, relative to the limit; 0 where there is none. */
const distance = (f: RawFinding) => (f.value === null || f.limit === null ? 0 : Math.abs(f.value - f.limit) / (Math.abs(f.limit) || 1))

/** A number as a sentence shows it: four significant digits, no exponent where none is needed. */
export const shown = (value: number) => (Math.abs(value) >= 1e5 || (value !== 0 && Math.abs(value) < 1e-3) ? value.toExponential(3) : String(Number(value.toPrecision(4))))
