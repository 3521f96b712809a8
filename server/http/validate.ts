import { Ajv2020, type ErrorObject, type ValidateFunction } from 'ajv/dist/2020.js'
import addFormats from 'ajv-formats'
import type { TSchema } from '@sinclair/typebox'
import { DomainError, type FieldProblem } from './errors.ts'

const ajv = new Ajv2020({ allErrors: true, strict: false, strictNumbers: true, verbose: false })
addFormats.default(ajv, ['email', 'date', 'date-time', 'uuid'])

const compiled = new WeakMap<TSchema, ValidateFunction>()

const words = (e: ErrorObject): string => {
  switch (e.keyword) {
    case 'additionalProperties':
      return `"${(e.params as { additionalProperty: string }).additionalProperty}" is not known here`
    case 'required':
      return `"${(e.params as { missingProperty: string }).missingProperty}" is missing`
    case 'enum':
    case 'const':
      return 'is none of the allowed values'
    case 'pattern':
      return `does not have the form ${(e.params as { pattern: string }).pattern}`
    default:
      return e.message ?? 'does not fit'
  }
}

const pointerOf = (e: ErrorObject) => {
  const extra = e.params as { additionalProperty?: string; missingProperty?: string }
  const part = extra.additionalProperty ?? extra.missingProperty
  return part === undefined ? e.instancePath : `${e.instancePath}/${part.replaceAll('~', '~0').replaceAll('/', '~1')}`
}

/** Every way in which data misses a schema, at once, with pointers. Alternatives are told as one. */
export function problemsOf(schema: TSchema, data: unknown): FieldProblem[] {
  let check = compiled.get(schema)
  if (!check) compiled.set(schema, (check = ajv.compile(schema)))
  if (check(data)) return []
  const errors = check.errors ?? []
  const unions = new Set(errors.filter((e) => e.keyword === 'anyOf').map((e) => e.instancePath))
  const told = errors.filter((e) => e.keyword === 'anyOf' || ![...unions].some((u) => e.instancePath === u && e.schemaPath.includes('/anyOf/')))
  return told.map((e) => ({ pointer: pointerOf(e), detail: e.keyword === 'anyOf' ? 'fits none of the allowed forms' : words(e) }))
}

/** Deepest nesting a body may have; deeper is refused before anything else walks it. */
const deepest = 40

/** Halves of a surrogate pair and the character NUL: neither the database nor a file gives them back as they were. */
const unkept = /\0|[\ud800-\udbff](?![\udc00-\udfff])|(?<![\ud800-\udbff])[\udc00-\udfff]/

export const keepable = (text: string) => !unkept.test(text)

/** What makes a body unfit before any schema is asked, with its place; null when nothing does. */
function unfit(body: unknown): FieldProblem | null {
  const stack: { value: unknown; pointer: string; depth: number }[] = [{ value: body, pointer: '', depth: 0 }]
  for (let next = stack.pop(); next; next = stack.pop()) {
    const { value, pointer, depth } = next
    if (typeof value === 'string' && !keepable(value)) return { pointer, detail: 'holds a character that text can\'t keep' }
    if (typeof value !== 'object' || value === null) continue
    if (depth >= deepest) return { pointer: pointer.slice(0, 200), detail: `is nested deeper than ${deepest} levels` }
    for (const [key, child] of Object.entries(value)) {
      if (!keepable(key)) return { pointer, detail: 'holds a name with a character that text can\'t keep' }
      stack.push({ value: child, pointer: `${pointer}/${key.replaceAll('~', '~0').replaceAll('/', '~1')}`, depth: depth + 1 })
    }
  }
  return null
}

/** @throws DomainError invalid-request, with a pointer for each problem */
export function validBody<T>(schema: TSchema, body: unknown): T {
  const bad = unfit(body)
  if (bad) throw new DomainError('invalid-request', `The body can't be taken: ${bad.pointer || 'it'} ${bad.detail}. Nothing was saved.`, { fields: [bad] })
  const fields = problemsOf(schema, body)
  if (fields.length > 0) throw new DomainError('invalid-request', `The request has ${fields.length === 1 ? 'one field that does not fit' : `${fields.length} fields that do not fit`}. Nothing was saved; correct what is named and send it again.`, { fields })
  return body as T
}
