import semver from 'semver'
import type { VersionProposal, VersionStep } from '../../../shared/contract/releases.ts'
import { versionSteps } from '../../../shared/contract/releases.ts'
import { same } from '../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import type { ResolvedJoint } from '../checks/resolve-joint.ts'

export type Resolved = ReadonlyMap<string, ResolvedJoint & { kind: 'resolved' }>

/** Roles whose values alone make a patch: gains, filters and set-point smoothing. */
const patchRoles = new Set(['position.kp', 'position.ki', 'velocity.kp', 'velocity.ki', 'velocity.window', 'current.kp', 'current.ki', 'acceleration.limit'])

/** Where the registers lie: what a board's firmware and bus master must agree on. */
const layoutOf = (schema: ParameterSchema) => JSON.stringify([schema.image.base, schema.image.length, schema.words.map((w) => [w.address, w.bytes, w.encoding, w.byteOrder, w.access, w.parameters.map((p) => [p.name, p.register?.bit ?? null, p.register?.width ?? null])])])

const stronger = (a: VersionStep, b: VersionStep) => (versionSteps.indexOf(a) >= versionSteps.indexOf(b) ? a : b)

/** How far a change steps, with a reason for each level it reaches. */
export function stepOf(base: MachineSet, candidate: MachineSet, before: Resolved, after: Resolved): { step: VersionStep; because: string[] } {
  const reasons = new Map<string, VersionStep>()
  const note = (step: VersionStep, why: string) => reasons.set(why, stronger(step, reasons.get(why) ?? 'patch'))
  for (const key of Object.keys(candidate.joints)) if (!Object.hasOwn(base.joints, key)) note('major', 'a joint is added')
  for (const key of Object.keys(base.joints)) if (!Object.hasOwn(candidate.joints, key)) note('major', 'a joint is removed')
  for (const [key, joint] of Object.entries(candidate.joints)) {
    const was = base.joints[key]
    const a = before.get(key)
    const b = after.get(key)
    if (!was || !a || !b) continue
    if (was.address !== joint.address || was.bus !== joint.bus) note('major', 'an address alters')
    if (was.firmware !== joint.firmware) note(layoutOf(a.schema) === layoutOf(b.schema) ? 'minor' : 'major', layoutOf(a.schema) === layoutOf(b.schema) ? 'a joint moves to another firmware version with the same registers' : 'the register layout alters')
    if (was.board !== joint.board) note('minor', 'board-bound values of another board')
    const old = new Map(a.values.map((v) => [v.name, v.value]))
    for (const v of b.values) {
      if (same(old.get(v.name), v.value)) continue
      const parameter = b.schema.byName.get(v.name)!
      if (parameter.role === 'bus.address') continue
      if (parameter.role !== null && patchRoles.has(parameter.role)) note('patch', 'gains, filters or smoothing alter')
      else note('minor', `${parameter.title.toLowerCase()} alters`)
    }
  }
  if (!same(base.buses, candidate.buses)) note('minor', 'a bus alters')
  if (Object.keys(candidate.families).some((f) => !same(base.families[f]?.driveTrain, candidate.families[f].driveTrain))) note('patch', 'a drive train alters')
  const step = [...reasons.values()].reduce<VersionStep>(stronger, 'patch')
  const because = [...reasons].sort((x, y) => versionSteps.indexOf(y[1]) - versionSteps.indexOf(x[1])).map(([why]) => why)
  return { step, because }
}

/** The version that Detent proposes after `newest`; 1.0.0 for a machine without a release. */
export function proposeVersion(newest: string | null, step: VersionStep, because: string[]): VersionProposal {
  return { version: newest === null ? '1.0.0' : semver.inc(newest, step)!, step, because: newest === null ? ['the first release of the machine'] : because }
}

/** The step between two versions as SemVer sees it. */
export function stepBetween(newest: string, version: string): VersionStep {
  const diff = semver.diff(newest, version)
  return diff === 'major' || diff === 'minor' ? diff : diff === 'premajor' ? 'major' : diff === 'preminor' ? 'minor' : 'patch'
}
