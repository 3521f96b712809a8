import { Ajv2020 } from 'ajv/dist/2020.js'
import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { findValueProblems } from '../../shared/registers/find-value-problems.ts'
import type { ParameterValues } from '../../shared/registers/parameter-schema.ts'
import { readParameterSchema } from '../../shared/registers/read-parameter-schema.ts'
import { aSchema, schemaJson, type Json } from './a-schema.ts'

const properties: Json = {
  a: { type: 'integer', default: 0, minimum: 0, maximum: 9, 'x-register': { address: 0, encoding: 'u8' } },
  b: { type: 'integer', default: 0, minimum: 0, maximum: 9, 'x-register': { address: 1, encoding: 'u8' } },
  on: { type: 'boolean', default: false, 'x-register': { address: 2, encoding: 'u8' } },
  mode: { enum: ['x', 'y', 'z'], default: 'x', 'x-register': { address: 3, encoding: 'u8', values: { x: 0, y: 1, z: 2 } } },
}

const digit = fc.integer({ min: 0, max: 9 })
const numberLeaf = fc.oneof(
  fc.record({ minimum: digit }), fc.record({ maximum: digit }), fc.record({ exclusiveMinimum: digit }), fc.record({ exclusiveMaximum: digit }),
  fc.record({ const: digit }), fc.record({ multipleOf: fc.integer({ min: 1, max: 4 }) }), fc.record({ enum: fc.uniqueArray(digit, { minLength: 1, maxLength: 4 }) }), fc.boolean(),
)
const leafOf = (leaf: fc.Arbitrary<unknown>): fc.Arbitrary<unknown> =>
  fc.oneof(leaf, fc.record({ not: leaf }), ...(['allOf', 'anyOf', 'oneOf'] as const).map((key) => fc.array(leaf, { minLength: 1, maxLength: 3 }).map((list) => ({ [key]: list }))))
const modeLeaf = fc.oneof(fc.constantFrom('x', 'y', 'z').map((c) => ({ const: c })), fc.uniqueArray(fc.constantFrom('x', 'y', 'z'), { minLength: 1 }).map((e) => ({ enum: e })))
const names = fc.subarray(['a', 'b', 'on', 'mode'])
const leaves = fc.record({ a: leafOf(numberLeaf), b: leafOf(numberLeaf), on: fc.boolean().map((c) => ({ const: c })), mode: leafOf(modeLeaf) }, { requiredKeys: [] }).map((p) => ({ properties: p }))

const { rule } = fc.letrec((tie) => ({
  rule: fc.oneof(
    { depthSize: 'small', withCrossShrink: true }, leaves, fc.boolean(), names.map((required) => ({ required })),
    fc.record({ not: tie('rule') }),
    fc.record({ if: tie('rule'), then: tie('rule'), else: tie('rule') }, { requiredKeys: ['if'] }),
    ...(['allOf', 'anyOf', 'oneOf'] as const).map((key) => fc.array(tie('rule'), { minLength: 1, maxLength: 3 }).map((list) => ({ [key]: list }))),
    fc.dictionary(fc.constantFrom('a', 'b', 'on'), names, { maxKeys: 2 }).map((dependentRequired) => ({ dependentRequired })),
    fc.dictionary(fc.constantFrom('a', 'mode'), tie('rule'), { maxKeys: 2 }).map((dependentSchemas) => ({ dependentSchemas })),
  ),
}))
const values = fc.record({ a: digit, b: digit, on: fc.boolean(), mode: fc.constantFrom('x', 'y', 'z') })

describe('rules over several parameters', () => {
  // reference: Ajv 8.20 on the same schema; whole numbers, where rounding to raw changes nothing
  it('are judged as Ajv judges them', () => {
    const ajv = new Ajv2020({ strict: false })
    const seen = new Set<boolean>()
    fc.assert(
      fc.property(rule, fc.array(values, { minLength: 4, maxLength: 8 }), (node, sets) => {
        const schema = aSchema(properties, {}, { allOf: [node] })
        const validate = ajv.compile({ type: 'object', allOf: [node] })
        for (const set of sets) {
          const holds = findValueProblems(schema, set as ParameterValues).length === 0
          seen.add(holds)
          expect(holds).toBe(validate(set))
        }
      }),
      { seed: 20261106, numRuns: 300 },
    )
    expect(seen.size).toBe(2)
  })

  it('stand at the root too, follow local references, and are told in the schema’s own words', () => {
    const schema = aSchema(properties, {}, {
      if: { $ref: '#/$defs/moving' }, then: { properties: { a: { minimum: 2 } } },
      allOf: [{ description: 'b stays below 5.', properties: { b: { exclusiveMaximum: 5 } } }],
      $defs: { moving: { properties: { on: { const: true } } } },
    })
    expect(findValueProblems(schema, { on: false, a: 0 })).toEqual([])
    expect(findValueProblems(schema, { on: true, a: 1, b: 5 }).map((p) => p.message)).toEqual(['b stays below 5.', 'The values break the schema\'s rule at /if, /then.'])
    expect(findValueProblems(schema, { on: true, a: 2 })).toEqual([])
  })

  it('are judged once each, however often a hostile schema refers to them', () => {
    const twice = (k: number) => ({ allOf: [{ $ref: `#/$defs/d${k}` }, { $ref: `#/$defs/d${k}` }] })
    const $defs = { ...Object.fromEntries(Array.from({ length: 30 }, (_, k) => [`d${k}`, twice(k + 1)])), d30: { properties: { a: { maximum: 4 } } } }
    const schema = aSchema(properties, {}, { $defs, allOf: [{ $ref: '#/$defs/d0' }] })
    expect(findValueProblems(schema, { a: 4 })).toEqual([])
    expect(findValueProblems(schema, { a: 5 })).toMatchObject([{ code: 'rule' }])
  })

  it('are checked where a reference leads, and lead to rules alone', () => {
    const problemsOf = (ref: string, $defs: Json) => {
      const reading = readParameterSchema(schemaJson(properties, {}, { $defs, allOf: [{ $ref: ref }] }))
      return reading.kind === 'refused' ? reading.problems : []
    }
    expect(problemsOf('#/$defs/r', { r: { properties: { a: { minLength: 3 } } } })).toMatchObject([{ pointer: '/$defs/r/properties/a/minLength', code: 'unknown-key' }])
    expect(problemsOf('#/$defs/r', { r: { required: ['nobody'] } })).toMatchObject([{ pointer: '/$defs/r/required/0', code: 'unknown-parameter' }])
    expect(problemsOf('#/properties/a', {})).toMatchObject([{ pointer: '/allOf/0/$ref', code: 'reference-to-no-rule' }])
    expect(problemsOf('#/$defs/r', { r: { properties: { a: { maximum: 3 } } } })).toEqual([])
  })

  it('round their bounds to raw values as the schema’s own are', () => {
    const parts = { v: { type: 'number', default: 0, 'x-register': { address: 0, encoding: 'f32' } }, on: { type: 'boolean', default: true, 'x-register': { address: 4, encoding: 'u8' } } }
    const schema = aSchema(parts, {}, { allOf: [{ if: { properties: { on: { const: true } } }, then: { properties: { v: { maximum: 0.2 } } } }] })
    expect(findValueProblems(schema, { v: Math.fround(0.2) })).toEqual([])
    expect(findValueProblems(schema, { v: 0.21 })).toHaveLength(1)
  })

  it('speak of the schema’s parameters alone', () => {
    expect(() => aSchema(properties, {}, { dependentRequired: { ghost: ['a'] } })).toThrow(/ghost/)
  })
})
