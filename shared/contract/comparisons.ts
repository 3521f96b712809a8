import type { Origin } from '../parameters/effective.ts'
import type { Value } from '../parameters/machine-set.ts'

/** One of the two things compared. */
export interface ComparedSide {
  /** as the address names it, such as "release:dunlin@1.7.0" */
  ref: string
  kind: string
  /** "Dunlin 1.7.0", "L1 knee r12", "change dunlin-47", … */
  label: string
  /** where it comes from, in a few words */
  note: string
  machine: string
  machineName: string
  joints: number
  /** pages that show it */
  release: { machine: string; version: string } | null
  change: string | null
}

export interface ComparedValue {
  parameter: string
  title: string
  /** name on side a, where the firmware versions call it differently */
  nameA: string | null
  unitA: string
  unitB: string
  a: { value: Value; origin: Origin | null } | null
  b: { value: Value; origin: Origin | null } | null
  /** from a to b; null where there is nothing to reckon */
  changePercent: number | null
}

/** A word of the register image that differs; bytes as hex in address order. */
export interface ComparedRegister {
  address: number
  bytes: number
  /** titles of its parameters, "checksum", "layout id", "release number", or "no register" */
  what: string
  encodingA: string
  encodingB: string
  a: string | null
  b: string | null
}

export interface ComparedField {
  field: string
  a: string | null
  b: string | null
}

/** Joints that differ alike. */
export interface ComparedJoints {
  joints: { key: string; name: string; keyB: string }[]
  /** they stand on one side alone */
  only: 'a' | 'b' | null
  settings: ComparedField[]
  driveTrain: ComparedField[]
  values: ComparedValue[]
  registers: ComparedRegister[]
  /** the image's own words, which every joint has for itself */
  own: (ComparedRegister & { joint: string })[]
  /** why registers can't be shown */
  problems: string[]
}

export interface ComparisonView {
  a: ComparedSide
  b: ComparedSide
  groups: ComparedJoints[]
  /** joints that are the same on both sides */
  same: { key: string; name: string }[]
  textA: string
  textB: string
}

/** What a side can be, for one machine. */
export interface CompareChoices {
  kinds: {
    kind: string
    label: string
    /** a joint may be added to narrow it */
    narrows: boolean
    choices: { ref: string; label: string; note: string }[]
  }[]
  joints: { key: string; name: string }[]
}
