import type { EntityManager } from '@mikro-orm/core'
import type { ComparedSide, CompareChoices } from '../../../shared/contract/comparisons.ts'
import type { Origin } from '../../../shared/parameters/effective.ts'
import type { DriveTrain, Value } from '../../../shared/parameters/machine-set.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import type { Machine } from '../machines/machine.entity.ts'

/** One joint of a side, whatever the side is. */
export interface SideJoint {
  key: string
  name: string
  settings: { family: string; bus: string; address: string; firmware: string; board: string }
  driveTrain: DriveTrain | null
  schema: ParameterSchema
  /** by parameter name; `origin` null where it is not known, as on a board */
  values: ReadonlyMap<string, { value: Value; origin: Origin | null }>
  /** the register image, or why there is none */
  image: Uint8Array | null
  problem: string | null
}

/** One of two things compared: a whole machine, or one joint. */
export interface Side {
  view: Omit<ComparedSide, 'joints'>
  joints: SideJoint[]
  /** one joint alone, by intent: it is held against the same joint, or the only joint, of the other side */
  narrowed: boolean
  /** the whole as text; null for one joint */
  text: string | null
}

export interface SideKind {
  kind: string
  /** "releases" */
  label: string
  /** what follows the kind in an address, in words */
  form: string
  narrows: boolean
  /** The side that an address names, or null when there is none. Whether it may be read is asked of its machine afterwards. */
  read(em: EntityManager, rest: string): Promise<Side | null>
  /** What of a machine can be chosen, newest first. */
  list(em: EntityManager, machine: Machine): Promise<CompareChoices['kinds'][number]['choices']>
}

export const hexAddress = (address: number) => `0x${address.toString(16).toUpperCase().padStart(2, '0')}`
