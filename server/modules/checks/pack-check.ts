import type { CheckResult, JointCheck, JointFigures } from '../../../shared/contract/checks.ts'

/** A check with equal figures once: eighteen joints in three families have three sets of them. */
export interface PackedCheck extends Omit<CheckResult, 'joints'> {
  joints: (Omit<JointCheck, 'candidate' | 'released'> & { candidate: number | null; released: number | null })[]
  figures: JointFigures[]
}

export function packCheck(result: CheckResult): PackedCheck {
  const figures: JointFigures[] = []
  const byText = new Map<string, number>()
  const byIdentity = new Map<JointFigures, number>()
  const indexOf = (f: JointFigures | null): number | null => {
    if (!f) return null
    let index = byIdentity.get(f)
    if (index === undefined) {
      const text = JSON.stringify(f)
      index = byText.get(text) ?? figures.push(f) - 1
      byText.set(text, index)
      byIdentity.set(f, index)
    }
    return index
  }
  return { ...result, joints: result.joints.map((j) => ({ ...j, candidate: indexOf(j.candidate), released: indexOf(j.released) })), figures }
}

export function unpackCheck({ figures, ...packed }: PackedCheck): CheckResult {
  const at = (index: number | null) => (index === null ? null : figures[index])
  return { ...packed, joints: packed.joints.map((j) => ({ ...j, candidate: at(j.candidate), released: at(j.released) })) }
}
