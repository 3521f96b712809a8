import { orderOf, type NumberCodec } from './encoding.ts'
import { targetOf } from './local-refs.ts'
import type { Bound, Bounds, Parameter, ParameterKind, ParameterValue } from './parameter-schema.ts'
import { isObject, shown, under, type Json, type ProblemList } from './problem-list.ts'
import { compare, exactly } from './rational.ts'
import { readRegister, type LeafShape } from './read-register.ts'
import { fitsRole, isRole, PER_TICK_ROLES, roleDimensions, type Role } from './roles.ts'
import { dimensionText, NO_DIMENSION } from '../units/dimension.ts'
import { parseUnit } from '../units/unit.ts'
import type { ByteOrder } from './word-bytes.ts'

const BOUND_KEYS = ['minimum', 'maximum', 'exclusiveMinimum', 'exclusiveMaximum', 'multipleOf'] as const
const ANNOTATIONS = ['$comment', 'title', 'description', 'default', 'examples', 'deprecated', 'readOnly', 'writeOnly'] as const
const ASSERTIONS = ['type', 'enum', 'const', ...BOUND_KEYS] as const
const OWN = ['x-unit', 'x-register', 'x-role', 'x-bound', 'x-per-tick'] as const
const KEYS = new Set<string>([...ANNOTATIONS, ...ASSERTIONS, ...OWN, '$ref'])
const NAME = /^[A-Za-z][A-Za-z0-9_-]{0,63}$/

/** Reads one leaf of the schema; null (and problems) when it cannot stand. */
export function readParameter(root: Json, name: string, leaf: unknown, mapOrder: ByteOrder, list: ProblemList): Parameter | null {
  const pointer = under('/properties', name)
  if (!NAME.test(name)) {
    list.add(pointer, 'bad-name', `${shown(name)} is no parameter name: up to 64 letters, digits, - and _, beginning with a letter.`)
    return null
  }
  const before = list.problems.length
  const stated = followRef(root, leaf, pointer, list)
  if (!stated) return null
  if (stated.type === 'object' || stated.properties !== undefined) {
    list.add(pointer, 'nested', `${name} is a group. Parameters stand directly under the root's properties.`)
    return null
  }
  list.onlyKeys(stated, pointer, KEYS)
  const shape = readShape(stated, pointer, list)
  if (!shape) return null
  const register = stated['x-register'] === undefined
    ? null
    : readRegister(stated['x-register'], under(pointer, 'x-register'), shape, mapOrder, list)
  if (stated['x-register'] !== undefined && !register) return null
  const unit = readUnit(stated, pointer, shape.kind, list)
  const role = readRole(stated, pointer, list)
  const perTick = stated['x-per-tick'] === undefined ? null : list.oneOf(stated, 'x-per-tick', pointer, ['current', 'outer'] as const)
  if (stated['x-bound'] !== undefined) list.oneOf(stated, 'x-bound', pointer, ['board'])
  if (role) checkRole(role, perTick !== null, unit, shape.kind, pointer, list)
  if (perTick && (!role || !PER_TICK_ROLES.includes(role))) {
    list.add(under(pointer, 'x-per-tick'), 'per-tick-without-gain', 'Only a gain with a role (…kp, …ki) can say x-per-tick.')
  }
  const bounds = readBounds(stated, pointer, shape.kind, register?.codec ?? null, list)
  if (list.problems.length > before) return null
  const constant = isValue(stated.const) ? stated.const : null
  return {
    name, pointer, title: list.text(stated, 'title', pointer) || name,
    description: list.text(stated, 'description', pointer),
    kind: shape.kind, unit, role, perTick, boardBound: stated['x-bound'] === 'board',
    default: isValue(stated.default) ? stated.default : constant,
    bounds, choices: shape.choices, constant, register,
  }
}

export const isValue = (value: unknown): value is ParameterValue =>
  typeof value === 'number' || typeof value === 'boolean' || typeof value === 'string'

/** A leaf with what its `$ref` chain says: own annotations win, an assertion may be stated once. */
function followRef(root: Json, leaf: unknown, pointer: string, list: ProblemList): Json | null {
  if (isObject(leaf) && leaf.$ref === undefined) return leaf
  let stated: Record<string, unknown> = {}
  let node = leaf
  for (;;) {
    if (!isObject(node)) {
      list.add(pointer, 'not-an-object', 'A parameter must be a JSON object.')
      return null
    }
    for (const key of ASSERTIONS) {
      if (stated[key] !== undefined && node[key] !== undefined && JSON.stringify(stated[key]) !== JSON.stringify(node[key])) {
        list.add(under(pointer, key), 'stated-twice', `${key} is stated here and, differently, in the schema that $ref points at.`)
      }
    }
    const ref: unknown = node.$ref
    stated = { ...node, ...stated }
    if (typeof ref !== 'string') return stated
    node = targetOf(root, ref)
  }
}

function readShape(leaf: Json, pointer: string, list: ProblemList): LeafShape | null {
  const type = leaf.type
  if (leaf.enum !== undefined) return readEnum(leaf.enum, type, pointer, list)
  if (type === 'number' || type === 'integer' || type === 'boolean') return { kind: type, choices: null }
  list.add(under(pointer, 'type'), 'bad-type', `${type === undefined ? 'A missing type' : shown(type)} is none of number, integer, boolean (or give an enum).`)
  return null
}

function readEnum(given: unknown, type: unknown, pointer: string, list: ProblemList): LeafShape | null {
  const at = under(pointer, 'enum')
  const members: readonly unknown[] = Array.isArray(given) ? given : []
  const strings = members.length > 0 && members.every((m) => typeof m === 'string' && m.length > 0 && m.length <= 64)
  const numbers = members.length > 0 && members.every((m) => typeof m === 'number' && Number.isFinite(m))
  if ((!strings && !numbers) || members.length > 256) {
    list.add(at, 'bad-enum', 'An enum is a list of 1 to 256 texts, or of numbers.')
    return null
  }
  if (type !== undefined && (strings ? type !== 'string' : type !== 'number' && type !== 'integer')) {
    list.add(under(pointer, 'type'), 'bad-type', `${shown(type)} is not the type of the enum's members.`)
    return null
  }
  if (new Set(members.map(String)).size !== members.length) list.add(at, 'bad-enum', 'A member stands in the enum twice.')
  return { kind: 'enum', choices: members as (string | number)[] }
}

function readUnit(leaf: Json, pointer: string, kind: ParameterKind, list: ProblemList): string | null {
  const unit = leaf['x-unit']
  if (unit === undefined) return null
  const at = under(pointer, 'x-unit')
  if (typeof unit !== 'string' || !parseUnit(unit)) {
    list.add(at, 'bad-unit', `${shown(unit)} is no unit that Detent knows. Examples: A·s/rad, V/(A·s), 1/s², mA, deg, rpm.`)
    return null
  }
  if (kind === 'boolean') list.add(at, 'unit-not-allowed', 'A boolean has no unit.')
  return unit
}

function readRole(leaf: Json, pointer: string, list: ProblemList): Role | null {
  const role = leaf['x-role']
  if (role === undefined || isRole(role)) return role ?? null
  list.add(under(pointer, 'x-role'), 'bad-role', `${shown(role)} is no role of the control model.`)
  return null
}

function checkRole(role: Role, perTick: boolean, unit: string | null, kind: ParameterKind, pointer: string, list: ProblemList): void {
  const wanted = roleDimensions(role, perTick)
  if (wanted === null) {
    if (role === 'control.mode' && kind !== 'enum') list.add(under(pointer, 'x-role'), 'role-kind', 'control.mode needs an enum.')
    if (role === 'supply.compensated' && kind !== 'boolean') list.add(under(pointer, 'x-role'), 'role-kind', 'supply.compensated needs a boolean.')
    return
  }
  if (kind !== 'number' && kind !== 'integer') {
    list.add(under(pointer, 'x-role'), 'role-kind', `${role} needs a number.`)
    return
  }
  const is = unit === null ? NO_DIMENSION : parseUnit(unit)!.dimension
  if (!fitsRole(role, perTick, is)) {
    list.add(under(pointer, 'x-unit'), 'role-unit',
      `${role} needs a unit of the dimension ${wanted.map(dimensionText).join(' or ')}; ${unit === null ? 'none is given' : `${unit} is ${dimensionText(is)}`}.`)
  }
}

const UNBOUNDED: Bounds = { minimum: null, maximum: null, exclusiveMinimum: null, exclusiveMaximum: null, multipleOf: null }

function readBounds(leaf: Json, pointer: string, kind: ParameterKind, codec: NumberCodec | null, list: ProblemList): Bounds {
  if (!BOUND_KEYS.some((key) => leaf[key] !== undefined)) return UNBOUNDED
  const bound = (key: (typeof BOUND_KEYS)[number]): Bound | null => {
    const given = leaf[key]
    if (given === undefined) return null
    const exact = typeof given === 'number' || typeof given === 'string' ? exactly(given) : null
    if (kind !== 'number' && kind !== 'integer') list.add(under(pointer, key), 'bound-not-allowed', `A ${kind} has no ${key}.`)
    else if (!exact || (key === 'multipleOf' && exact.n <= 0n)) list.add(under(pointer, key), 'not-a-decimal', `${shown(given)} is no number that ${key} can be.`)
    else return { text: String(given), exact, order: codec ? orderOf(codec, exact) : null }
    return null
  }
  const bounds: Bounds = { minimum: bound('minimum'), maximum: bound('maximum'), exclusiveMinimum: bound('exclusiveMinimum'), exclusiveMaximum: bound('exclusiveMaximum'), multipleOf: bound('multipleOf') }
  const low = bounds.minimum ?? bounds.exclusiveMinimum
  const high = bounds.maximum ?? bounds.exclusiveMaximum
  if (low && high && compare(low.exact, high.exact) > 0) {
    list.add(under(pointer, 'maximum'), 'empty-range', `The maximum ${high.text} lies below the minimum ${low.text}.`)
  }
  return bounds
}
