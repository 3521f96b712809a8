import type { TSchema } from '@sinclair/typebox'
import fc from 'fast-check'

type Any = fc.Arbitrary<unknown>

/** Strings that programs trip over. */
export const hostileString: fc.Arbitrary<string> = fc.oneof(
  fc.constantFrom('', ' ', '\0', '\ud800', '../../etc/passwd', '__proto__', 'constructor', 'toString', "'; drop table person; --", '=1+1', '${7*7}', '<script>alert(1)</script>', '\u202e', 'ﬁ', '%00', '%', '-0', 'NaN', '1e999', 'null', '9'.repeat(400)),
  fc.string({ unit: 'binary', maxLength: 60 }),
  fc.string({ minLength: 500, maxLength: 3000 }),
)

/** JSON of any shape, deep and with names that reach into prototypes. */
export const hostileJson: Any = fc.oneof(
  fc.jsonValue({ maxDepth: 4 }),
  fc.constantFrom<unknown>(JSON.parse('{"__proto__":{"admin":true}}'), JSON.parse('{"constructor":{"prototype":{"admin":true}}}'), [], [[]], '', 0, null, true, -1, 1e308, { toString: 1 }),
  fc.integer({ min: 30, max: 400 }).map((depth) => JSON.parse(`${'['.repeat(depth)}${']'.repeat(depth)}`) as unknown),
)

interface Schema {
  type?: string
  const?: unknown
  enum?: unknown[]
  anyOf?: Schema[]
  allOf?: Schema[]
  properties?: Record<string, Schema>
  required?: string[]
  items?: Schema
  patternProperties?: Record<string, Schema>
  additionalProperties?: boolean | Schema
  minLength?: number
  maxLength?: number
  minItems?: number
  maxItems?: number
  minimum?: number
  maximum?: number
  exclusiveMinimum?: number
  exclusiveMaximum?: number
  pattern?: string
  format?: string
}

/** Words that stand in real requests, so that values meet what is there. */
const words = fc.constantFrom('dunlin', 'teasel', 'dunlin-1', 'dunlin-2', '1.0.0', '1.1.0', '2.1.0', '2.2.0', 'l1-knee', 'r1-knee', 'knee', 'hinge', 'fore', 'HB-0117', 'A reason.', '2026-12-31', 'a@dunlin.example', 'release:dunlin@1.0.0', '/families/knee/values/velocityGain')

function stringOf(schema: Schema): Any {
  const { minLength = 0, maxLength = 200, pattern, format } = schema
  const free: Any = fc.oneof(words, fc.string({ minLength: Math.min(minLength, 200), maxLength: Math.max(minLength, Math.min(maxLength, 200)) }))
  if (format === 'email') return fc.emailAddress()
  if (format === 'date') return fc.constantFrom('2026-12-31', '2026-02-29', '0000-00-00')
  if (pattern === undefined) return free
  try {
    return fc.oneof(fc.stringMatching(new RegExp(pattern)), free)
  } catch {
    // a pattern that the generator cannot turn round
    return free
  }
}

function numberOf({ type, minimum, maximum, exclusiveMinimum, exclusiveMaximum }: Schema): Any {
  const low = minimum ?? exclusiveMinimum ?? -1e6
  const high = maximum ?? exclusiveMaximum ?? 1e6
  if (type === 'integer') return fc.integer({ min: Math.max(Math.ceil(low), -(2 ** 53) + 1), max: Math.min(Math.floor(high), 2 ** 53 - 1) })
  return fc.double({ min: low, max: high, noNaN: true })
}

function objectOf({ properties = {}, required = [], patternProperties = {}, additionalProperties }: Schema): Any {
  const known = fc.record(Object.fromEntries(Object.entries(properties).map(([name, schema]) => [name, fits(schema)])), { requiredKeys: required as never[] })
  const [open] = [...Object.values(patternProperties), ...(typeof additionalProperties === 'object' ? [additionalProperties] : [])]
  if (!open) return known
  return fc.tuple(known, fc.dictionary(words as fc.Arbitrary<string>, fits(open), { maxKeys: 4 })).map(([a, b]) => ({ ...b, ...a }))
}

function fits(schema: Schema): Any {
  if ('const' in schema) return fc.constant(schema.const)
  if (schema.enum) return fc.constantFrom(...schema.enum)
  if (schema.anyOf) return fc.oneof(...schema.anyOf.map(fits))
  if (schema.allOf) return fc.tuple(...schema.allOf.map(fits)).map((parts) => Object.assign({}, ...parts) as unknown)
  switch (schema.type) {
    case 'string':
      return stringOf(schema)
    case 'number':
    case 'integer':
      return numberOf(schema)
    case 'boolean':
      return fc.boolean()
    case 'null':
      return fc.constant(null)
    case 'array':
      return fc.array(fits(schema.items ?? {}), { minLength: schema.minItems ?? 0, maxLength: Math.min(schema.maxItems ?? 4, Math.max(4, schema.minItems ?? 0)) })
    case 'object':
      return objectOf(schema)
    default:
      return fc.jsonValue({ maxDepth: 2 })
  }
}

/** Replaces one member, anywhere, by something that does not belong there; or adds or takes one. */
function spoiled(value: unknown, { pick, by }: { pick: number; by: unknown }): unknown {
  if (typeof value !== 'object' || value === null) return by
  const copy = structuredClone(value) as Record<string, unknown>
  const names = Object.keys(copy)
  if (names.length === 0 || pick % 7 === 0) return { ...copy, extra: by }
  const name = names[pick % names.length]
  if (pick % 5 === 0) delete copy[name]
  else copy[name] = pick % 3 === 0 ? spoiled(copy[name], { pick: Math.floor(pick / 3), by }) : by
  return copy
}

/** Bodies for a schema: ones that fit, ones that nearly do, and hostile ones. */
export function arbitraryOf(schema: TSchema): Any {
  const good = fits(schema as Schema)
  const near = fc.tuple(good, fc.nat(1000), fc.oneof(hostileString, hostileJson)).map(([value, pick, by]) => spoiled(value, { pick, by }))
  return fc.oneof({ weight: 5, arbitrary: good }, { weight: 4, arbitrary: near }, { weight: 1, arbitrary: hostileJson })
}
