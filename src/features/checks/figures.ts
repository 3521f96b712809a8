import type { CheckResult, Finding, JointCheck, LoopFigures, Verdict } from '../../../shared/contract/checks.ts'
import { loopNames, type LoopName } from '../../../shared/contract/loop-names.ts'

export interface Figure {
  loop: LoopName
  name: string
  /** where there is little room */
  brief: string
  unit: string
  before: number | null
  after: number | null
  /** words where there is no number: "above 60 dB", "unstable" */
  beforeReads: string
  afterReads: string
  /** scale of the ruler */
  range: [low: number, high: number]
  /** policy's limit for it, where the check judged one */
  policy: number | null
  missed: boolean
}

interface Kind {
  name: string
  brief: string
  unit: string
  finding: string
  value: (f: LoopFigures) => number | null
  reads: (f: LoopFigures) => string
  range: [number, number] | 'log'
}

const kinds: readonly Kind[] = [
  { name: 'phase', brief: 'phase', unit: '°', finding: 'phase margin', value: (f) => f.phaseMarginDeg, reads: (f) => f.phaseMarginReads, range: [0, 90] },
  { name: 'gain', brief: 'gain', unit: 'dB', finding: 'gain margin', value: (f) => f.gainMarginDb, reads: (f) => f.gainMarginReads, range: [0, 30] },
  { name: 'sensitivity peak', brief: 'peak', unit: '', finding: 'sensitivity peak', value: (f) => f.sensitivityPeak, reads: () => '', range: [1, 4] },
  { name: 'bandwidth', brief: 'bandwidth', unit: 'Hz', finding: 'bandwidth', value: (f) => f.bandwidthHz, reads: () => '', range: 'log' },
]

const rangeOf = (kind: Kind, values: readonly number[]): [number, number] => {
  if (kind.range !== 'log') return [kind.range[0], Math.max(kind.range[1], ...values)]
  return [Math.min(...values) / 3, Math.max(...values) * 3]
}

/** Figures of each loop of a joint before and after, as far as the check computed them. */
export function figuresOf(check: JointCheck, findings: readonly Finding[]): Figure[] {
  return loopNames.flatMap((loop) =>
    kinds.flatMap((kind): Figure[] => {
      const [b, a] = [check.released?.loops[loop], check.candidate?.loops[loop]]
      const before = b ? kind.value(b) : null
      const after = a ? kind.value(a) : null
      const beforeReads = b ? kind.reads(b) : ''
      const afterReads = a ? kind.reads(a) : ''
      if (before === null && after === null && !beforeReads && !afterReads) return []
      const judged = findings.find((f) => f.kind === kind.finding && f.loop === loop && f.limit !== null && (f.joints.length === 0 || f.joints.includes(check.joint)))
      const values = [before, after].filter((v): v is number => v !== null)
      return [{ loop, name: kind.name, brief: kind.brief, unit: kind.unit, before, after, beforeReads, afterReads, range: rangeOf(kind, values.length > 0 ? values : [1]), policy: judged?.limit ?? null, missed: judged !== undefined && judged.level !== 'pass' }]
    }),
  )
}

const gravity: readonly Verdict[] = ['stable', 'on the boundary', 'unstable']

/** Of several joints the one to look at first: touched before untouched, the gravest verdict, then the largest ρ. */
export function worstOf(joints: readonly JointCheck[]): JointCheck | null {
  const rank = (j: JointCheck) => (j.candidate ? gravity.indexOf(j.candidate.verdict) : 3)
  return (
    joints.toSorted((a, b) => Number(b.touched) - Number(a.touched) || rank(b) - rank(a) || (b.candidate?.rho ?? 0) - (a.candidate?.rho ?? 0) || a.joint.localeCompare(b.joint, 'en-GB', { numeric: true }))[0] ?? null
  )
}

/** Joints of a check whose candidate figures are the same, folded: one line for each. */
export function alike(joints: readonly JointCheck[]): JointCheck[][] {
  const groups = new Map<string, JointCheck[]>()
  for (const j of joints) {
    const key = JSON.stringify([j.touched, j.candidate?.verdict, j.candidate?.rho, j.released?.verdict, j.released?.rho])
    groups.set(key, [...(groups.get(key) ?? []), j])
  }
  return [...groups.values()]
}

/** "24: 1 concession needed, 3 advise, 20 pass". */
export const countsText = ({ counts, findings }: Pick<CheckResult, 'counts' | 'findings'>): string =>
  `${findings.length}: ${(['block', 'concession needed', 'advise', 'pass'] as const).filter((l) => counts[l] > 0).map((l) => `${counts[l]} ${l}`).join(', ')}`
