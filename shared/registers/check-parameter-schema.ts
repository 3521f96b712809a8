import { Ajv2020, type ErrorObject, type ValidateFunction } from 'ajv/dist/2020.js'
import { findNodeAtLocation, parseTree } from 'jsonc-parser'
import metaSchema from '../../schemas/parameter-schema.json' with { type: 'json' }
import vocabulary from '../../schemas/register-vocabulary.json' with { type: 'json' }
import { placeOf, readJsonText, type JsonLimits } from './json-text.ts'
import type { ParameterSchema, SchemaProblem } from './parameter-schema.ts'
import { MAX_PROBLEMS, shown, under } from './problem-list.ts'
import { readParameterSchema } from './read-parameter-schema.ts'

export type SchemaCheck =
  | { readonly kind: 'schema'; readonly schema: ParameterSchema; readonly json: unknown; readonly advice: readonly SchemaProblem[] }
  | { readonly kind: 'refused'; readonly problems: readonly SchemaProblem[] }

/** A map of ten thousand registers, indented, has half as many characters; nothing larger is read. */
export const SCHEMA_LIMITS: JsonLimits = { length: 6_000_000, depth: 40 }

let compiled: ValidateFunction | null = null

/** The meta-schema's validator, compiled at its first use. */
function metaValidator(): ValidateFunction {
  if (!compiled) {
    const ajv = new Ajv2020({ allErrors: true, strict: false, validateFormats: false })
    ajv.addSchema(vocabulary)
    compiled = ajv.compile(metaSchema)
  }
  return compiled
}

/**
 * A parameter schema as text: syntax, meta-schema (Ajv), references, registers, units, roles, defaults.
 *
 * Every problem has its JSON pointer, line and column. The schema as given is never compiled: nothing in it runs.
 */
export function checkParameterSchemaText(text: string, limits: JsonLimits = SCHEMA_LIMITS): SchemaCheck {
  const json = readJsonText(text, limits)
  if (json.kind === 'refused') {
    return { kind: 'refused', problems: [{ pointer: '', code: 'not-json', message: json.message, line: json.line, column: json.column }] }
  }
  const check = checkParameterSchema(json.value)
  return check.kind === 'schema' ? check : { kind: 'refused', problems: located(text, check.problems) }
}

/** The same for a schema that is already parsed. */
export function checkParameterSchema(json: unknown): SchemaCheck {
  const reading = readParameterSchema(json)
  // what the reading refuses to walk (depth, references) is not given to Ajv either
  const unsafe = reading.kind === 'refused' && reading.problems.some((p) => p.code === 'too-deep')
  const byMetaSchema = unsafe || metaValidator()(json) ? [] : (metaValidator().errors ?? [])
  const problems = reading.kind === 'refused' ? [...reading.problems] : []
  const told = new Set(problems.map((p) => p.pointer))
  for (const error of byMetaSchema) {
    const problem = problemOf(error)
    if (told.has(problem.pointer) || problems.length >= MAX_PROBLEMS) continue
    told.add(problem.pointer)
    problems.push(problem)
  }
  if (reading.kind === 'refused' || problems.length > 0) return { kind: 'refused', problems }
  return { kind: 'schema', schema: reading.schema, json, advice: reading.schema.advice }
}

function problemOf(error: ErrorObject): SchemaProblem {
  const params = error.params as Record<string, unknown>
  if (typeof params.additionalProperty === 'string') {
    return { pointer: under(error.instancePath, params.additionalProperty), code: 'unknown-key', message: `“${params.additionalProperty}” is not known here.` }
  }
  if (error.keyword === 'enum') return { pointer: error.instancePath, code: 'not-a-choice', message: `This is none of ${shown(params.allowedValues)}.` }
  return { pointer: error.instancePath, code: `meta-${error.keyword}`, message: `${(error.message ?? 'is not allowed').replace(/^./, (c) => c.toUpperCase())}.` }
}

/** Adds line and column: of the thing a pointer names, else of the nearest thing around it. */
export function located(text: string, problems: readonly SchemaProblem[]): SchemaProblem[] {
  const tree = parseTree(text)
  return problems.map((problem) => {
    const path = problem.pointer === '' ? [] : problem.pointer.slice(1).split('/').map((step) => step.replaceAll('~1', '/').replaceAll('~0', '~'))
    for (let length = path.length; tree && length >= 0; length -= 1) {
      const steps = path.slice(0, length)
      const node = nodeAt(tree, steps)
      if (node) return { ...problem, ...placeOf(text, node.parent?.type === 'property' ? node.parent.offset : node.offset) }
    }
    return { ...problem, line: 1, column: 1 }
  })
}

function nodeAt(tree: NonNullable<ReturnType<typeof parseTree>>, steps: readonly string[]): ReturnType<typeof findNodeAtLocation> {
  let node: ReturnType<typeof findNodeAtLocation> = tree
  for (const step of steps) {
    if (!node) return undefined
    node = findNodeAtLocation(node, [node.type === 'array' ? Number(step) : step])
  }
  return node
}
