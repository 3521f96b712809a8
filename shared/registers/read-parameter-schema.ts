import { checkReferences } from './local-refs.ts'
import { readCarryRules } from './carry-rules.ts'
import { physicalRange, rawAtOrder } from './encoding.ts'
import { SchemaError, type Parameter, type ParameterSchema, type SchemaReading } from './parameter-schema.ts'
import { isObject, ProblemList, shown, under, type Json } from './problem-list.ts'
import { readImageLayout } from './read-image-layout.ts'
import { readParameter } from './read-parameter.ts'
import { layWords } from './register-map.ts'
import type { Role } from './roles.ts'
import { checkRules, RULE_KEYS, rulesOf } from './rules.ts'
import { problemOfValue } from './value-check.ts'

const ROOT_KEYS = new Set<string>([
  '$schema', '$id', '$comment', '$defs', 'title', 'description', 'type', 'properties', 'required', 'additionalProperties',
  'unevaluatedProperties', 'examples', 'x-image', 'x-carry', ...RULE_KEYS,
])
const DIALECTS = ['https://json-schema.org/draft/2020-12/schema', 'https://detent.example/schemas/parameter-schema.json']
/** An image of 64 KiB has no room for more registers than that. */
const MAX_PARAMETERS = 65536

/**
 * Reads a parameter schema: JSON Schema 2020-12 with Detent's register annotations.
 *
 * All problems are told at once, each with a JSON pointer. Nothing of a refused schema can be used.
 *
 * @param json  the schema as parsed; a number that a double does not hold may stand as its decimal text
 * @source      register-image.md, Register annotations
 */
export function readParameterSchema(json: unknown): SchemaReading {
  const list = new ProblemList()
  if (!isObject(json)) {
    list.add('', 'not-an-object', 'A parameter schema is a JSON object.')
    return { kind: 'refused', problems: list.problems }
  }
  if (!checkReferences(json, list)) return { kind: 'refused', problems: list.problems }
  const schema = readRoot(json, list)
  return schema && list.problems.length === 0 ? { kind: 'schema', schema } : { kind: 'refused', problems: list.problems }
}

/** Short cut for a schema that is known to be good, such as a published one; throws SchemaError when it is not. */
export function expectParameterSchema(json: unknown): ParameterSchema {
  const reading = readParameterSchema(json)
  if (reading.kind === 'refused') throw new SchemaError(reading.problems)
  return reading.schema
}

function readRoot(root: Json, list: ProblemList): ParameterSchema | null {
  list.onlyKeys(root, '', ROOT_KEYS)
  if (root.$schema !== undefined) list.oneOf(root, '$schema', '', DIALECTS)
  if (root.type !== undefined && root.type !== 'object') list.add('/type', 'bad-type', 'The root of a parameter schema describes an object.')
  for (const key of ['additionalProperties', 'unevaluatedProperties']) {
    if (root[key] !== undefined && root[key] !== false) list.add(under('', key), 'open-set', `${key} can only be false: a set has the schema's parameters and no others.`)
  }
  const image = readImageLayout(root['x-image'], list)
  if (!isObject(root.properties)) {
    list.add(root.properties === undefined ? '' : '/properties', 'not-an-object', 'The schema needs properties: one for each parameter.')
    return null
  }
  const entries = Object.entries(root.properties)
  if (entries.length > MAX_PARAMETERS) {
    list.add('/properties', 'too-many', `${entries.length} parameters are more than the ${MAX_PARAMETERS} addresses.`)
    return null
  }
  const parameters: Parameter[] = []
  for (const [name, leaf] of entries) {
    const parameter = readParameter(root, name, leaf, image?.byteOrder ?? 'little', list)
    if (parameter) parameters.push(parameter)
  }
  const byName = new Map(parameters.map((p) => [p.name, p]))
  const byRole = rolesOf(parameters, list)
  for (const parameter of parameters) checkParameter(parameter, root, list)
  checkRequired(root.required, byName, list)
  const complete = parameters.length === entries.length
  if (complete) checkRules(root, byName, list)
  const carry = root['x-carry'] === undefined ? null : readCarryRules(root['x-carry'], byName, complete, list)
  if (!image) return null
  const words = layWords(parameters, image, list)
  return {
    title: list.text(root, 'title', ''), description: list.text(root, 'description', ''),
    parameters, byName, byRole, image, words, rules: rulesOf(root), carry, advice: list.advice,
  }
}

function rolesOf(parameters: readonly Parameter[], list: ProblemList): Map<Role, Parameter> {
  const byRole = new Map<Role, Parameter>()
  for (const parameter of parameters) {
    if (!parameter.role) continue
    const other = byRole.get(parameter.role)
    if (other) list.add(under(parameter.pointer, 'x-role'), 'role-twice', `${other.name} already has the role ${parameter.role}.`)
    else byRole.set(parameter.role, parameter)
  }
  return byRole
}

function checkParameter(parameter: Parameter, root: Json, list: ProblemList): void {
  const stated = (root.properties as Json)[parameter.name] as Json
  const readOnly = parameter.register?.access === 'ro'
  for (const key of ['default', 'const']) {
    if (stated[key] !== undefined && typeof stated[key] === 'object') list.add(under(parameter.pointer, key), 'wrong-type', `${shown(stated[key])} is no value.`)
  }
  if (readOnly && parameter.default !== null) {
    list.add(under(parameter.pointer, 'default'), 'read-only', 'A read-only register has no default: the board writes it.')
  } else if (parameter.default !== null) {
    const wrong = problemOfValue(parameter, parameter.default)
    if (wrong) list.add(under(parameter.pointer, parameter.default === parameter.constant ? 'const' : 'default'), `default-${wrong.code}`, wrong.message)
  } else if (!parameter.register) {
    list.add(parameter.pointer, 'constant-without-value', 'A parameter without x-register is a constant of the firmware and needs a const or a default.')
  }
  if (!parameter.register || parameter.register.values) return
  const { codec } = parameter.register
  for (const key of ['minimum', 'maximum'] as const) {
    const bound = parameter.bounds[key]
    if (bound && bound.order !== null && rawAtOrder(codec, bound.order).kind === 'out-of-range') {
      const { low, high } = physicalRange(codec)
      list.advise(under(parameter.pointer, key), 'bound-beyond-register', `The ${key} ${bound.text} lies beyond what ${parameter.register.encoding.name} holds (${low} to ${high}).`)
    }
  }
}

function checkRequired(required: unknown, byName: ReadonlyMap<string, Parameter>, list: ProblemList): void {
  if (required === undefined) return
  if (!Array.isArray(required)) return list.add('/required', 'not-a-list', 'required must be a list of parameter names.')
  required.forEach((name, k) => {
    if (!byName.has(String(name))) list.add(under('/required', k), 'unknown-parameter', `${shown(name)} is no parameter of this schema.`)
  })
}
