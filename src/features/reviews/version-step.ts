import type { VersionStep } from '../../../shared/contract/releases.ts'
import { versionSteps } from '../../../shared/contract/releases.ts'

const VERSION = /^(0|[1-9]\d*)\.(0|[1-9]\d*)\.(0|[1-9]\d*)(?:-[0-9A-Za-z.-]+)?$/

/** Major, minor and patch of a SemVer text; null when it is none. */
export function partsOf(version: string): [number, number, number] | null {
  const match = VERSION.exec(version.trim())
  return match ? [Number(match[1]), Number(match[2]), Number(match[3])] : null
}

/** The step from one version to a later one; null when the second is not later, or either is no version. */
export function stepBetween(before: string, after: string): VersionStep | null {
  const [a, b] = [partsOf(before), partsOf(after)]
  if (!a || !b) return null
  if (b[0] !== a[0]) return b[0] > a[0] ? 'major' : null
  if (b[1] !== a[1]) return b[1] > a[1] ? 'minor' : null
  return b[2] > a[2] ? 'patch' : null
}

export const isLower = (step: VersionStep, than: VersionStep): boolean => versionSteps.indexOf(step) < versionSteps.indexOf(than)
