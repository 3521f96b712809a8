import { isObject, shown, under, type Json, type ProblemList } from './problem-list.ts'

/** Deepest nesting a schema may have; enough for any map, far from a stack's end. */
export const MAX_DEPTH = 32

/** Keywords whose keys are names, so that a parameter may be called “pattern”. */
const NAMED = new Set(['properties', '$defs', 'dependentSchemas', 'dependentRequired'])

/** What a `$ref` inside the same schema points at; undefined when it points nowhere. */
export function targetOf(root: Json, ref: string): unknown {
  if (ref === '#') return root
  let node: unknown = root
  for (const step of ref.slice(2).split('/')) {
    const key = decode(step)
    if (Array.isArray(node) && /^\d+$/.test(key)) node = node[Number(key)]
    else if (isObject(node) && Object.hasOwn(node, key)) node = node[key]
    else return undefined
  }
  return node
}

function decode(step: string): string {
  try {
    return decodeURIComponent(step).replaceAll('~1', '/').replaceAll('~0', '~')
  } catch {
    return step
  }
}

/** Keys whose content is data or names, not schemas: a `$ref` inside them is none. */
const DATA = new Set(['const', 'enum', 'default', 'examples', 'x-register', 'x-image', 'x-carry'])

/**
 * Walks a whole schema before anything else reads it: refuses remote and cyclic references, references that point
 * nowhere, dynamic ones, regular expressions, and nesting beyond the limit.
 *
 * @returns false when the schema must not be read further
 */
export function checkReferences(root: Json, list: ProblemList): boolean {
  const before = list.problems.length
  const refs = new Map<string, string>()
  walk(root, null, false, refs, list)
  if (list.problems.length > before) return false
  checkCycles(root, refs, list)
  return list.problems.length === before
}

/** One step of the way to a node; a pointer is written only where it is needed. */
interface Step { readonly key: string | number; readonly up: Step | null; readonly depth: number }

const pointerOf = (step: Step | null): string => (step ? under(pointerOf(step.up), step.key) : '')

/** `names`: the node's keys are names of parameters or definitions, not keywords. `refs`: reference found at each pointer. */
function walk(node: unknown, step: Step | null, names: boolean, refs: Map<string, string>, list: ProblemList): void {
  const depth = step ? step.depth + 1 : 1
  if (depth > MAX_DEPTH) {
    list.add(pointerOf(step).slice(0, 200), 'too-deep', `The schema is nested deeper than ${MAX_DEPTH} levels.`)
    return
  }
  if (Array.isArray(node)) {
    node.forEach((item: unknown, key) => { if (typeof item === 'object' && item !== null) walk(item, { key, up: step, depth }, false, refs, list) })
    return
  }
  if (!isObject(node)) return
  for (const key of Object.keys(node)) {
    const value = node[key]
    if (!names && key.startsWith('$') ? !readReference(key, value, step, refs, list) : !names && isRefused(key, step, list)) continue
    if (typeof value !== 'object' || value === null || (!names && DATA.has(key))) continue
    walk(value, { key, up: step, depth }, !names && NAMED.has(key), refs, list)
  }
}

function isRefused(key: string, step: Step | null, list: ProblemList): boolean {
  if (key !== 'pattern' && key !== 'patternProperties') return false
  list.add(under(pointerOf(step), key), 'regular-expression', 'Regular expressions have no place in a parameter schema: its values are numbers, booleans and enums.')
  return true
}

/** Notes a `$ref`, refuses the keywords that reach further; true for a `$` key that is neither. */
function readReference(key: string, value: unknown, step: Step | null, refs: Map<string, string>, list: ProblemList): boolean {
  if (key === '$dynamicRef' || key === '$dynamicAnchor' || key === '$anchor' || key === '$recursiveRef') {
    list.add(under(pointerOf(step), key), 'reference-not-allowed', `${key} is not allowed; use $ref with a JSON pointer into $defs.`)
    return false
  }
  if (key === '$id' && step) {
    list.add(under(pointerOf(step), key), 'reference-not-allowed', 'Only the root of a parameter schema may have an $id.')
    return false
  }
  if (key !== '$ref') return true
  const at = under(pointerOf(step), key)
  if (typeof value === 'string' && /^#(\/|$)/.test(value)) refs.set(at, value)
  else list.add(at, 'remote-reference', `${shown(value)} is not a reference inside this schema. Write "#/$defs/…".`)
  return false
}

function checkCycles(root: Json, refs: ReadonlyMap<string, string>, list: ProblemList): void {
  // pointers sorted, so that the references inside a target are one run of the list
  const places = [...refs.keys()].sort()
  const done = new Set<string>()
  const open = new Set<string>()
  const inside = (target: string): string[] => {
    const start = `${target}/`
    let first = firstAtOrAfter(places, start)
    const found: string[] = []
    for (; first < places.length && places[first].startsWith(start); first += 1) found.push(places[first])
    return found
  }
  const visit = (place: string): void => {
    if (done.has(place)) return
    const ref = refs.get(place)!
    if (targetOf(root, ref) === undefined) {
      list.add(place, 'reference-to-nothing', `${shown(ref)} points at nothing in this schema.`)
      done.add(place)
      return
    }
    if (open.has(place) || place.startsWith(`${ref.slice(1)}/`)) {
      list.add(place, 'cyclic-reference', `${shown(ref)} leads back to itself.`)
      done.add(place)
      return
    }
    open.add(place)
    if (open.size <= MAX_DEPTH) inside(ref.slice(1)).forEach(visit)
    else list.add(place, 'too-deep', `References lead through more than ${MAX_DEPTH} others.`)
    open.delete(place)
    done.add(place)
  }
  places.forEach(visit)
}

/** Binary search in a sorted list. */
function firstAtOrAfter(sorted: readonly string[], wanted: string): number {
  let low = 0
  let high = sorted.length
  while (low < high) {
    const middle = (low + high) >> 1
    if (sorted[middle] < wanted) low = middle + 1
    else high = middle
  }
  return low
}
