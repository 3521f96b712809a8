import type { Parameter, ParameterSchema, ParameterValue, ParameterValues } from './parameter-schema.ts'
import { isObject, shown, under, type Json, type ProblemList } from './problem-list.ts'
import { compare, divide, exactly, type Rational } from './rational.ts'
import { orderOf } from './encoding.ts'
import { targetOf } from './local-refs.ts'
import { effectiveValue, equalValues, type ValueProblem } from './value-check.ts'

/** Keywords by which the root of a schema states rules over several parameters (JSON Schema 2020-12, applicators). */
export const RULE_KEYS = ['allOf', 'anyOf', 'oneOf', 'not', 'if', 'then', 'else', 'dependentRequired', 'dependentSchemas'] as const
const NODE_KEYS = new Set<string>([...RULE_KEYS, '$ref', '$comment', 'title', 'description', 'properties', 'required'])
const LEAF_KEYS = new Set(['const', 'enum', 'minimum', 'maximum', 'exclusiveMinimum', 'exclusiveMaximum', 'multipleOf', 'not', 'allOf', 'anyOf', 'oneOf', '$comment', 'title', 'description'])
const LISTS = ['allOf', 'anyOf', 'oneOf'] as const

/** What a walk over the rules needs: names that exist, the rules with their $defs, and what was checked already. */
interface Walk {
  readonly names: ReadonlyMap<string, Parameter>
  readonly root: Json
  readonly list: ProblemList
  readonly seen: Set<unknown>
}

/** Checks the shape of the rules in a schema: only keywords that are evaluated, only parameters that exist, references to rules only. */
export function checkRules(root: Json, names: ReadonlyMap<string, Parameter>, list: ProblemList): void {
  const walk: Walk = { names, root: withRules(root), list, seen: new Set() }
  for (const key of RULE_KEYS) if (root[key] !== undefined) checkPart(key, root[key], under('', key), walk)
}

/** The part of a schema that rules may refer to. */
const withRules = (root: Json): Json => Object.fromEntries([...RULE_KEYS, '$defs'].filter((key) => root[key] !== undefined).map((key) => [key, root[key]]))

/** The schema's rules with its $defs, so that a $ref in a rule finds its target; null when there are none. */
export const rulesOf = (root: Json): Json | null => (RULE_KEYS.some((key) => root[key] !== undefined) ? withRules(root) : null)

function checkNode(node: unknown, at: string, walk: Walk): void {
  const { names, list } = walk
  // a target that many refer to is walked once
  if (typeof node === 'boolean' || walk.seen.has(node)) return
  walk.seen.add(node)
  if (!isObject(node)) return list.add(at, 'not-an-object', 'A rule is an object, true or false.')
  list.onlyKeys(node, at, NODE_KEYS)
  if (typeof node.$ref === 'string') checkReference(node.$ref, under(at, '$ref'), walk)
  for (const key of RULE_KEYS) if (node[key] !== undefined) checkPart(key, node[key], under(at, key), walk)
  if (node.required !== undefined) checkNames(node.required, under(at, 'required'), walk)
  if (node.properties === undefined) return
  if (!isObject(node.properties)) return list.add(under(at, 'properties'), 'not-an-object', 'properties must be an object.')
  for (const [name, leaf] of Object.entries(node.properties)) {
    const where = under(under(at, 'properties'), name)
    const parameter = names.get(name)
    if (!parameter) list.add(where, 'unknown-parameter', `${shown(name)} is no parameter of this schema.`)
    else checkLeaf(leaf, where, parameter, list)
  }
}

function checkReference(ref: string, at: string, walk: Walk): void {
  const target = targetOf(walk.root, ref)
  if (ref === '#' || target === undefined) walk.list.add(at, 'reference-to-no-rule', `${shown(ref)} is no rule; a rule refers to one in $defs.`)
  else checkNode(target, ref.slice(1), walk)
}

function checkPart(key: (typeof RULE_KEYS)[number], value: unknown, at: string, walk: Walk): void {
  const { names, list } = walk
  if (key === 'allOf' || key === 'anyOf' || key === 'oneOf') {
    if (!Array.isArray(value) || value.length === 0) return list.add(at, 'not-a-list', `${key} must be a list of rules.`)
    value.forEach((node, k) => checkNode(node, under(at, k), walk))
  } else if (key === 'dependentRequired' || key === 'dependentSchemas') {
    if (!isObject(value)) return list.add(at, 'not-an-object', `${key} must be an object.`)
    for (const [name, part] of Object.entries(value)) {
      if (!names.has(name)) list.add(under(at, name), 'unknown-parameter', `${shown(name)} is no parameter of this schema.`)
      if (key === 'dependentRequired') checkNames(part, under(at, name), walk)
      else checkNode(part, under(at, name), walk)
    }
  } else checkNode(value, at, walk)
}

function checkLeaf(leaf: unknown, at: string, parameter: Parameter, list: ProblemList): void {
  if (typeof leaf === 'boolean') return
  if (!isObject(leaf)) return list.add(at, 'not-an-object', 'A rule is an object, true or false.')
  list.onlyKeys(leaf, at, LEAF_KEYS)
  for (const key of ['minimum', 'maximum', 'exclusiveMinimum', 'exclusiveMaximum', 'multipleOf']) {
    const given = leaf[key]
    if (given === undefined) continue
    const exact = typeof given === 'number' || typeof given === 'string' ? exactly(given) : null
    if (!exact || (key === 'multipleOf' && exact.n <= 0n)) list.add(under(at, key), 'not-a-decimal', `${shown(given)} is no number that ${key} can be.`)
    if (parameter.kind === 'boolean' || parameter.kind === 'enum') list.add(under(at, key), 'bound-not-allowed', `A ${parameter.kind} has no ${key}.`)
  }
  if (leaf.enum !== undefined && !Array.isArray(leaf.enum)) list.add(under(at, 'enum'), 'bad-enum', 'enum must be a list.')
  if (leaf.not !== undefined) checkLeaf(leaf.not, under(at, 'not'), parameter, list)
  for (const key of LISTS) {
    const part = leaf[key]
    if (part === undefined) continue
    if (!Array.isArray(part) || part.length === 0) list.add(under(at, key), 'not-a-list', `${key} must be a list of rules.`)
    else part.forEach((node, k) => checkLeaf(node, under(under(at, key), k), parameter, list))
  }
}

function checkNames(value: unknown, at: string, { names, list }: Walk): void {
  if (!Array.isArray(value)) return list.add(at, 'not-a-list', 'A list of parameter names is wanted here.')
  value.forEach((name, k) => {
    if (!names.has(String(name))) list.add(under(at, k), 'unknown-parameter', `${shown(name)} is no parameter of this schema.`)
  })
}

/** Rules that a set of effective values breaks; each is named by its title or description, else by its pointer. */
export function findRuleProblems(schema: ParameterSchema, values: ParameterValues): ValueProblem[] {
  const root = schema.rules
  if (!root) return []
  const problems: ValueProblem[] = []
  const judging: Judging = { schema, values, known: new Map() }
  const judge = (node: unknown, at: string): void => {
    if (holds(node, judging)) return
    const said = isObject(node) ? (node.description ?? node.title) : undefined
    problems.push({ pointer: '', parameter: '', code: 'rule', message: typeof said === 'string' ? said : `The values break the schema's rule at ${at}.` })
  }
  const { allOf, ...rest } = root
  if (Array.isArray(allOf)) allOf.forEach((node, k) => judge(node, `/allOf/${k}`))
  judge(rest, Object.keys(rest).filter((key) => key !== '$defs').map((key) => `/${key}`).join(', '))
  return problems
}

interface Judging {
  readonly schema: ParameterSchema
  readonly values: ParameterValues
  /** Verdicts by rule: references that fan out would else be followed 2^n times. */
  readonly known: Map<Json, boolean>
}

function holds(node: unknown, judging: Judging): boolean {
  if (typeof node === 'boolean') return node
  if (!isObject(node)) return true
  const known = judging.known.get(node)
  if (known !== undefined) return known
  const verdict = nodeHolds(node, judging)
  judging.known.set(node, verdict)
  return verdict
}

function nodeHolds(node: Json, judging: Judging): boolean {
  const { schema, values } = judging
  const all = (part: unknown): boolean => holds(part, judging)
  const known = (name: unknown): boolean => {
    const parameter = schema.byName.get(String(name))
    return parameter !== undefined && effectiveValue(parameter, values) !== undefined
  }
  if (typeof node.$ref === 'string' && !all(targetOf(schema.rules as Json, node.$ref))) return false
  if (Array.isArray(node.required) && !node.required.every(known)) return false
  if (isObject(node.properties) && !Object.entries(node.properties).every(([name, leaf]) => leafHolds(leaf, schema.byName.get(name), values))) return false
  if (Array.isArray(node.allOf) && !node.allOf.every(all)) return false
  if (Array.isArray(node.anyOf) && !node.anyOf.some(all)) return false
  if (Array.isArray(node.oneOf) && node.oneOf.filter(all).length !== 1) return false
  if (node.not !== undefined && all(node.not)) return false
  if (node.if !== undefined && !all(all(node.if) ? (node.then ?? true) : (node.else ?? true))) return false
  if (isObject(node.dependentRequired)) {
    for (const [name, list] of Object.entries(node.dependentRequired)) if (known(name) && Array.isArray(list) && !list.every(known)) return false
  }
  if (isObject(node.dependentSchemas)) {
    for (const [name, part] of Object.entries(node.dependentSchemas)) if (known(name) && !all(part)) return false
  }
  return true
}

function leafHolds(leaf: unknown, parameter: Parameter | undefined, values: ParameterValues): boolean {
  const value = parameter ? effectiveValue(parameter, values) : undefined
  if (!parameter || value === undefined) return true
  return valueHolds(leaf, parameter, value)
}

function valueHolds(leaf: unknown, parameter: Parameter, value: ParameterValue): boolean {
  if (typeof leaf === 'boolean') return leaf
  if (!isObject(leaf)) return true
  const each = (part: unknown): boolean => valueHolds(part, parameter, value)
  const equal = (other: unknown): boolean => equalValues(parameter, other as ParameterValue, value)
  if (leaf.const !== undefined && !equal(leaf.const)) return false
  if (Array.isArray(leaf.enum) && !leaf.enum.some(equal)) return false
  const exact = typeof value === 'boolean' ? null : exactly(value)
  if (exact && !withinBounds(leaf, parameter, exact)) return false
  if (leaf.not !== undefined && each(leaf.not)) return false
  if (Array.isArray(leaf.allOf) && !leaf.allOf.every(each)) return false
  if (Array.isArray(leaf.anyOf) && !leaf.anyOf.some(each)) return false
  return !(Array.isArray(leaf.oneOf) && leaf.oneOf.filter(each).length !== 1)
}

/** Bounds inside a rule, rounded to raw as the schema's own are. */
function withinBounds(leaf: Json, parameter: Parameter, exact: Rational): boolean {
  const codec = parameter.register?.codec
  const sign = (given: unknown): number => {
    const bound = exactly(given as number | string)
    if (!bound) return 0
    if (!codec) return compare(exact, bound)
    const difference = orderOf(codec, exact) - orderOf(codec, bound)
    return difference < 0n ? -1 : difference > 0n ? 1 : 0
  }
  if (leaf.minimum !== undefined && sign(leaf.minimum) < 0) return false
  if (leaf.maximum !== undefined && sign(leaf.maximum) > 0) return false
  if (leaf.exclusiveMinimum !== undefined && sign(leaf.exclusiveMinimum) <= 0) return false
  if (leaf.exclusiveMaximum !== undefined && sign(leaf.exclusiveMaximum) >= 0) return false
  if (leaf.multipleOf === undefined) return true
  const step = exactly(leaf.multipleOf as number | string)
  if (!step) return true
  const count = divide(exact, step)
  return count.n % count.d === 0n
}
