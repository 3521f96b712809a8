import type { ChecksumAlgorithm } from './checksum.ts'
import type { Encoding, NumberCodec } from './encoding.ts'
import type { Rational } from './rational.ts'
import type { Role } from './roles.ts'
import type { ByteOrder } from './word-bytes.ts'

/**
 * A value of a parameter set: a number, a boolean, an enum's member, or the decimal text of a number
 * that a double does not hold.
 */
export type ParameterValue = number | boolean | string
/** Values by parameter name; names are flat, one per property of the schema's root. */
export type ParameterValues = Readonly<Record<string, ParameterValue>>

export type Access = 'rw' | 'ro' | 'wo'
export type ParameterKind = 'number' | 'integer' | 'boolean' | 'enum'

/** The place of one parameter on the board. */
export interface Register {
  /** Register address of the first byte. */
  readonly address: number
  /** 1, 2 or 4. */
  readonly bytes: number
  readonly encoding: Encoding
  readonly byteOrder: ByteOrder
  readonly access: Access
  /** Exact decimal texts; `1` and `0` unless the schema says otherwise. */
  readonly scale: string
  readonly offset: string
  readonly codec: NumberCodec
  /** First bit and width of a field; null for a register that has the word to itself. */
  readonly bit: number | null
  readonly width: number | null
  /** Raw word outside the fields as this field states it; null when it does not. */
  readonly reserved: number | null
  /** Raw value of each member of an enum, or of false and true; null for numbers. */
  readonly values: Readonly<Record<string, number>> | null
}

/** A bound with its exact value and, when the parameter has a register, its place in the order of raw values. */
export interface Bound {
  readonly text: string
  readonly exact: Rational
  readonly order: bigint | null
}

export interface Bounds {
  readonly minimum: Bound | null
  readonly maximum: Bound | null
  readonly exclusiveMinimum: Bound | null
  readonly exclusiveMaximum: Bound | null
  readonly multipleOf: Bound | null
}

export interface Parameter {
  readonly name: string
  /** JSON pointer of the leaf in the schema. */
  readonly pointer: string
  readonly title: string
  readonly description: string
  readonly kind: ParameterKind
  /** Unit of the physical value; null for none. */
  readonly unit: string | null
  readonly role: Role | null
  readonly perTick: 'current' | 'outer' | null
  readonly boardBound: boolean
  readonly default: ParameterValue | null
  readonly bounds: Bounds
  /** Members of an enum, in the schema's order; null otherwise. */
  readonly choices: readonly (string | number)[] | null
  readonly constant: ParameterValue | null
  /** Null for a constant of the firmware that no register holds: it has a default (or `const`) and takes no value. */
  readonly register: Register | null
}

/** A register that the image itself needs: checksum, layout id, release number. */
export interface ImageRegister {
  readonly address: number
  readonly bytes: number
  readonly encoding: Encoding
}

export interface ImageLayout {
  /** Register address of image byte 0. */
  readonly base: number
  readonly length: number
  readonly fill: number
  readonly writeGaps: boolean
  readonly byteOrder: ByteOrder
  readonly addressWidth: 8 | 16
  /** Where HEX and S-record begin. */
  readonly loadAddress: number
  readonly checksum: (ImageRegister & { readonly algorithm: ChecksumAlgorithm; readonly from: number; readonly to: number }) | null
  readonly layoutId: (ImageRegister & { readonly value: number }) | null
  readonly release: ImageRegister | null
}

export type WordKind = 'parameter' | 'checksum' | 'layout-id' | 'release'

/** One addressable word: a register, or the fields that share one. */
export interface Word {
  readonly kind: WordKind
  readonly address: number
  readonly bytes: number
  readonly encoding: Encoding
  readonly byteOrder: ByteOrder
  readonly access: Access
  readonly reserved: number
  /** Parameters in the word, by bit; empty for the image's own registers. */
  readonly parameters: readonly Parameter[]
}

/** How to carry a set over from the version before (`x-carry`). */
export interface CarryRules {
  /** Version the rules start from. */
  readonly from: string
  /** Old name → new name. */
  readonly renames: Readonly<Record<string, string>>
  /** New name → the unit its value had before. */
  readonly units: Readonly<Record<string, string>>
  /** New name → the value it begins with. */
  readonly defaults: Readonly<Record<string, ParameterValue>>
  /** Old names that end here. */
  readonly dropped: readonly string[]
}

export interface ParameterSchema {
  readonly title: string
  readonly description: string
  readonly parameters: readonly Parameter[]
  readonly byName: ReadonlyMap<string, Parameter>
  readonly byRole: ReadonlyMap<Role, Parameter>
  readonly image: ImageLayout
  /** Every word of the map, by address: parameters of all access kinds and the image's own registers. */
  readonly words: readonly Word[]
  /** Rules over several parameters (`allOf`, `if`, `dependentRequired` …) as the schema states them. */
  readonly rules: RuleNode | null
  readonly carry: CarryRules | null
  /** What is allowed but worth a second look, such as a bound that the register cannot reach. */
  readonly advice: readonly SchemaProblem[]
}

export type RuleNode = Readonly<Record<string, unknown>>

export interface SchemaProblem {
  /** JSON pointer into the schema. */
  readonly pointer: string
  readonly code: string
  readonly message: string
  /** 1-based place in the text, when the schema was given as text. */
  readonly line?: number
  readonly column?: number
}

export type SchemaReading =
  | { readonly kind: 'schema'; readonly schema: ParameterSchema }
  | { readonly kind: 'refused'; readonly problems: readonly SchemaProblem[] }

/** Thrown by the short cuts that expect a good schema. */
export class SchemaError extends Error {
  readonly problems: readonly SchemaProblem[]
  constructor(problems: readonly SchemaProblem[]) {
    super(problems.map((p) => `${p.pointer || '/'}: ${p.message}`).join('\n'))
    this.name = 'SchemaError'
    this.problems = problems
  }
}
