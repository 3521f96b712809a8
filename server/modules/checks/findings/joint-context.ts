import type { JointFigures, LoopName } from '../../../../shared/contract/checks.ts'
import type { PolicyContent } from '../../../../shared/contract/policy.ts'
import type { DriveTrain } from '../../../../shared/parameters/machine-set.ts'
import type { EncodedImage } from '../../../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../../../shared/registers/parameter-schema.ts'
import type { Role } from '../../../../shared/registers/roles.ts'
import type { JointModel } from '../../../control/model.ts'
import type { RoleReader } from '../joint-model.ts'
import type { RawFinding } from './finding.ts'

/** What a finding about one joint is derived from: registers, drive train, policy, and the figures as far as they are computed. */
export interface JointContext {
  family: string
  joint: string
  driveTrain: DriveTrain
  schema: ParameterSchema
  encoded: EncodedImage
  role: RoleReader
  policy: PolicyContent
  /** null where nothing could be analysed */
  model: JointModel | null
  figures: JointFigures | null
  /** serial number and directions as the base release recorded them; null where it does not know the joint or its board */
  recorded: { board: string; role: RoleReader } | null
  board: string | null
  /** where the value of a role stands in the set */
  pointerTo(role: Role): string | undefined
}

/** A role's value where it is a number. */
export const numberOf = (c: Pick<JointContext, 'role'>, role: Role): number | null => {
  const value = c.role(role)
  return typeof value === 'number' ? value : null
}

type Judged = Omit<RawFinding, 'place' | 'joint' | 'pointer'> & { blame?: Role }

/** A finding about the joint; `blame` leads to the value that would mend it. */
export function about(c: JointContext, { blame, ...finding }: Judged): RawFinding {
  const pointer = finding.level === 'pass' || blame === undefined ? undefined : c.pointerTo(blame)
  return { place: c.family, joint: c.joint, ...finding, ...(pointer === undefined ? {} : { pointer }) }
}

/** Loops from the inside out, with the gain that moves each most. */
export const loopOrder: readonly LoopName[] = ['current', 'velocity', 'position']
export const gainOf: Record<LoopName, Role> = { current: 'current.kp', velocity: 'velocity.kp', position: 'position.kp' }
