import type { CarryRules, Parameter, ParameterValue } from './parameter-schema.ts'
import { isObject, shown, under, type Json, type ProblemList } from './problem-list.ts'
import { isValue } from './read-parameter.ts'
import { problemOfValue } from './value-check.ts'
import { sameDimension } from '../units/dimension.ts'
import { parseUnit } from '../units/unit.ts'

const KEYS = new Set(['from', 'renames', 'units', 'defaults', 'dropped', '$comment'])
/** SemVer 2.0.0 core with optional pre-release and build parts. */
const VERSION = /^(0|[1-9]\d{0,9})\.(0|[1-9]\d{0,9})\.(0|[1-9]\d{0,9})(-[0-9A-Za-z.-]{1,40})?(\+[0-9A-Za-z.-]{1,40})?$/

/** Reads `x-carry`: how a set of the version before becomes one of this version. */
export function readCarryRules(value: unknown, byName: ReadonlyMap<string, Parameter>, complete: boolean, list: ProblemList): CarryRules | null {
  const at = '/x-carry'
  if (!isObject(value)) {
    list.add(at, 'not-an-object', 'x-carry must be an object.')
    return null
  }
  list.onlyKeys(value, at, KEYS)
  if (typeof value.from !== 'string' || !VERSION.test(value.from)) {
    list.add(under(at, 'from'), 'bad-version', `${shown(value.from)} is no version such as 2.0.0.`)
    return null
  }
  const known = (name: string, where: string): Parameter | null => {
    const parameter = byName.get(name)
    if (!parameter && complete) list.add(where, 'unknown-parameter', `${shown(name)} is no parameter of this schema.`)
    return parameter ?? null
  }
  const renames: Record<string, string> = {}
  for (const [old, now, where] of textsOf(value, 'renames', at, list)) {
    if (known(now, where)) renames[old] = now
    if (Object.entries(renames).some(([o, n]) => n === now && o !== old)) list.add(where, 'named-twice', `Two old names lead to ${now}.`)
  }
  const units: Record<string, string> = {}
  for (const [name, unit, where] of textsOf(value, 'units', at, list)) {
    const parameter = known(name, where)
    if (parameter) checkUnit(parameter, unit, where, list)
    units[name] = unit
  }
  const defaults: Record<string, ParameterValue> = {}
  if (value.defaults !== undefined && !isObject(value.defaults)) list.add(under(at, 'defaults'), 'not-an-object', 'defaults must be an object.')
  for (const [name, given] of Object.entries(isObject(value.defaults) ? value.defaults : {})) {
    const where = under(under(at, 'defaults'), name)
    const parameter = known(name, where)
    const wrong = parameter ? problemOfValue(parameter, given) : null
    if (wrong) list.add(where, `default-${wrong.code}`, wrong.message)
    if (isValue(given)) defaults[name] = given
  }
  const dropped = value.dropped === undefined ? [] : value.dropped
  if (!Array.isArray(dropped) || !dropped.every((name) => typeof name === 'string')) {
    list.add(under(at, 'dropped'), 'not-a-list', 'dropped must be a list of old names.')
    return null
  }
  return { from: value.from, renames, units, defaults, dropped }
}

function* textsOf(value: Json, key: string, at: string, list: ProblemList): Generator<[string, string, string]> {
  const part = value[key]
  if (part === undefined) return
  if (!isObject(part)) return list.add(under(at, key), 'not-an-object', `${key} must be an object.`)
  for (const [name, text] of Object.entries(part)) {
    const where = under(under(at, key), name)
    if (typeof text === 'string') yield [name, text, where]
    else list.add(where, 'not-a-text', `${shown(text)} is no text.`)
  }
}

function checkUnit(parameter: Parameter, unit: string, at: string, list: ProblemList): void {
  const before = parseUnit(unit)
  const now = parameter.unit === null ? null : parseUnit(parameter.unit)
  if (!before) list.add(at, 'bad-unit', `${shown(unit)} is no unit that Detent knows.`)
  else if (!now || !sameDimension(before.dimension, now.dimension)) {
    list.add(at, 'role-unit', `${unit} cannot become ${parameter.unit ?? 'a plain number'}.`)
  }
}
