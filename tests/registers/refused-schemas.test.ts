import { describe, expect, it } from 'vitest'
import { checkParameterSchema, checkParameterSchemaText } from '../../shared/registers/check-parameter-schema.ts'
import { readParameterSchema } from '../../shared/registers/read-parameter-schema.ts'
import { aSchema, schemaJson, type Json } from './a-schema.ts'

const u8 = (address: number, more: Json = {}): Json => ({ type: 'integer', default: 0, 'x-register': { address, encoding: 'u8', ...more } })
const flag = (bit: number, more: Json = {}): Json => ({ type: 'boolean', default: false, 'x-register': { address: 0, encoding: 'u8', bit, ...more } })
const number = (register: Json, more: Json = {}): Json => ({ type: 'number', default: 0, 'x-register': { address: 0, ...register }, ...more })
const role = (name: string, unit: string | undefined, more: Json = {}): Json => number({ encoding: 'f32' }, { 'x-role': name, ...(unit ? { 'x-unit': unit } : {}), ...more })
const rule = (node: unknown): Json => schemaJson({ a: u8(0) }, {}, { allOf: [node] })
const checksum = (more: Json = {}): Json => ({ checksum: { algorithm: 'CRC-16/IBM-3740', address: 62, encoding: 'u16', ...more } })

// schema, code, pointer of the first problem
const REFUSED: [string, unknown, string, string][] = [
  ['no object', [], 'not-an-object', ''],
  ['no image', { properties: {} }, 'image-missing', ''],
  ['no properties', { 'x-image': { length: 8 } }, 'not-an-object', ''],
  ['unknown root key', schemaJson({}, {}, { propertys: {} }), 'unknown-key', '/propertys'],
  ['another dialect', schemaJson({}, {}, { $schema: 'http://json-schema.org/draft-07/schema#' }), 'not-a-choice', '/$schema'],
  ['open set', schemaJson({}, {}, { additionalProperties: true }), 'open-set', '/additionalProperties'],
  ['image too long for 8 bit', schemaJson({}, { base: 200, length: 57 }), 'beyond-addresses', '/x-image/length'],
  ['fill of two bytes', schemaJson({}, { fill: 256 }), 'not-in-range', '/x-image/fill'],
  ['address width 12', schemaJson({}, { addressWidth: 12 }), 'not-a-choice', '/x-image/addressWidth'],
  ['overlap', schemaJson({ a: number({ encoding: 'u32' }), b: u8(3) }), 'registers-overlap', '/properties/b/x-register/address'],
  ['same address, other encoding', schemaJson({ a: flag(0), b: { ...flag(1), 'x-register': { address: 0, encoding: 'u16', bit: 1 } } }), 'registers-overlap', '/properties/b/x-register/address'],
  ['same whole word twice', schemaJson({ a: u8(1), b: u8(1) }), 'registers-overlap', '/properties/b/x-register/address'],
  ['a register on the layout id', schemaJson({ a: u8(1) }, { layoutId: { value: 1, address: 0, encoding: 'u16' } }), 'registers-overlap', '/properties/a/x-register/address'],
  ['register hidden under a long one', schemaJson({ a: number({ encoding: 'u32' }), b: u8(1), c: u8(3) }), 'registers-overlap', '/properties/b/x-register/address'],
  ['beyond the image', schemaJson({ a: { ...number({ encoding: 'u16' }), 'x-register': { address: 63, encoding: 'u16' } } }), 'outside-image', '/properties/a/x-register/address'],
  ['before the image', schemaJson({ a: u8(3) }, { base: 4 }), 'outside-image', '/properties/a/x-register/address'],
  ['fields that overlap', schemaJson({ a: flag(0, { width: 2 }), b: flag(1) }), 'fields-overlap', '/properties/b/x-register/bit'],
  ['a field past the word', schemaJson({ a: flag(7, { width: 2 }) }), 'not-in-range', '/properties/a/x-register/width'],
  ['reserved bits that disagree', schemaJson({ a: flag(0, { reserved: 128 }), b: flag(1, { reserved: 64 }) }), 'reserved-differs', '/properties/b/x-register/reserved'],
  ['reserved 0 against 128', schemaJson({ a: flag(0, { reserved: 128 }), b: flag(1, { reserved: 0 }) }), 'reserved-differs', '/properties/b/x-register/reserved'],
  ['reserved bits inside a field', schemaJson({ a: flag(0, { reserved: 2 }), b: flag(1) }), 'reserved-in-field', '/properties/a/x-register/reserved'],
  ['two accesses in a word', schemaJson({ a: flag(0), b: { ...flag(1, { access: 'wo' }) } }), 'access-differs', '/properties/b/x-register/access'],
  ['a number as a field', schemaJson({ a: u8(0, { bit: 1 }) }), 'field-not-allowed', '/properties/a/x-register/bit'],
  ['width without bit', schemaJson({ a: { type: 'boolean', default: false, 'x-register': { address: 0, encoding: 'u8', width: 2 } } }), 'field-without-bit', '/properties/a/x-register/width'],
  ['q of 33 bits', schemaJson({ a: number({ encoding: 'q8.24' }) }), 'bad-encoding', '/properties/a/x-register/encoding'],
  ['scale 0', schemaJson({ a: u8(0, { scale: 0 }) }), 'zero-scale', '/properties/a/x-register/scale'],
  ['scale on fixed point', schemaJson({ a: number({ encoding: 'q7.8', scale: 2 }) }), 'scale-not-allowed', '/properties/a/x-register/scale'],
  ['scale lost beside the offset', schemaJson({ a: number({ encoding: 'u16', scale: 1e-9, offset: 1e9 }) }), 'scale-too-fine', '/properties/a/x-register/scale'],
  ['a boolean in q', schemaJson({ a: { type: 'boolean', default: true, 'x-register': { address: 0, encoding: 'q3.4' } } }), 'bad-encoding', '/properties/a/x-register/encoding'],
  ['enum without values', schemaJson({ a: { enum: ['x'], default: 'x', 'x-register': { address: 0, encoding: 'u8' } } }), 'values-missing', '/properties/a/x-register/values'],
  ['enum member without value', schemaJson({ a: { enum: ['x', 'y'], default: 'x', 'x-register': { address: 0, encoding: 'u8', values: { x: 0 } } } }), 'member-missing', '/properties/a/x-register/values'],
  ['one raw value for two members', schemaJson({ a: { enum: ['x', 'y'], default: 'x', 'x-register': { address: 0, encoding: 'u8', values: { x: 1, y: 1 } } } }), 'same-raw-value', '/properties/a/x-register/values/y'],
  ['raw value too wide for its field', schemaJson({ a: { enum: ['x'], default: 'x', 'x-register': { address: 0, encoding: 'u8', bit: 0, width: 2, values: { x: 4 } } } }), 'not-in-range', '/properties/a/x-register/values/x'],
  ['default above the maximum', schemaJson({ a: { ...u8(0), default: 3, maximum: 2 } }), 'default-above-maximum', '/properties/a/default'],
  ['default the register cannot hold', schemaJson({ a: { ...u8(0), default: 256 } }), 'default-out-of-range', '/properties/a/default'],
  ['maximum below minimum', schemaJson({ a: { ...u8(0), minimum: 2, maximum: 1 } }), 'empty-range', '/properties/a/maximum'],
  ['default on a read-only register', schemaJson({ a: u8(0, { access: 'ro' }) }), 'read-only', '/properties/a/default'],
  ['default from a reference on a read-only register', schemaJson({ a: { $ref: '#/$defs/d', 'x-register': { address: 0, encoding: 'u8', access: 'ro' } } }, {}, { $defs: { d: { type: 'number', default: 1 } } }), 'read-only', '/properties/a/default'],
  ['constant outside its register', schemaJson({ a: { type: 'number', const: 300, 'x-register': { address: 0, encoding: 'u8' } } }), 'default-out-of-range', '/properties/a/const'],
  ['constant without a value', schemaJson({ a: { type: 'number' } }), 'constant-without-value', '/properties/a'],
  ['a text parameter', schemaJson({ a: { type: 'string' } }), 'bad-type', '/properties/a/type'],
  ['a group', schemaJson({ a: { type: 'object', properties: {} } }), 'nested', '/properties/a'],
  ['a name that objects have for themselves', JSON.parse('{ "x-image": { "length": 4 }, "properties": { "__proto__": { "type": "integer", "default": 0, "x-register": { "address": 0, "encoding": "u8" } } } }'), 'bad-name', '/properties/__proto__'],
  ['a name with a slash', schemaJson({ 'a/b': u8(0) }), 'bad-name', '/properties/a~1b'],
  ['unknown role', schemaJson({ a: role('torque.limit', 'A') }), 'bad-role', '/properties/a/x-role'],
  ['a role twice', schemaJson({ a: role('current.limit', 'A'), b: { ...role('current.limit', 'A'), 'x-register': { address: 4, encoding: 'f32' } } }), 'role-twice', '/properties/b/x-role'],
  ['a role in another dimension', schemaJson({ a: role('current.limit', 'V') }), 'role-unit', '/properties/a/x-unit'],
  ['a gain without its angle', schemaJson({ a: role('velocity.kp', 'A·s') }), 'role-unit', '/properties/a/x-unit'],
  ['a role without its unit', schemaJson({ a: role('current.limit', undefined) }), 'role-unit', '/properties/a/x-unit'],
  ['per-tick gain in the unit without period', schemaJson({ a: role('velocity.ki', 'A/rad', { 'x-per-tick': 'outer' }) }), 'role-unit', '/properties/a/x-unit'],
  ['x-per-tick on a limit', schemaJson({ a: role('current.limit', 'A·s', { 'x-per-tick': 'outer' }) }), 'per-tick-without-gain', '/properties/a/x-per-tick'],
  ['unknown unit', schemaJson({ a: { ...u8(0), 'x-unit': 'furlong' } }), 'bad-unit', '/properties/a/x-unit'],
  ['checksum over telemetry', schemaJson({ a: { type: 'integer', 'x-register': { address: 5, encoding: 'u8', access: 'ro' } } }, checksum()), 'checksum-over-unwritten', '/x-image/checksum'],
  ['checksum over a command', schemaJson({ a: u8(5, { access: 'wo' }) }, checksum()), 'checksum-over-unwritten', '/x-image/checksum'],
  ['checksum wider than its register', schemaJson({}, checksum({ encoding: 'u8' })), 'bad-encoding', '/x-image/checksum/encoding'],
  ['checksum range outside', schemaJson({}, checksum({ to: 64 })), 'not-in-range', '/x-image/checksum/to'],
  ['checksum range backwards', schemaJson({}, checksum({ from: 9, to: 8 })), 'empty-range', '/x-image/checksum/to'],
  ['unknown checksum', schemaJson({}, checksum({ algorithm: 'CRC-16/ARC' })), 'not-a-choice', '/x-image/checksum/algorithm'],
  ['layout id too large', schemaJson({}, { layoutId: { value: 65536, address: 0, encoding: 'u16' } }), 'not-in-range', '/x-image/layoutId/value'],
  ['remote reference', schemaJson({ a: { $ref: 'https://detent.example/gain.json' } }), 'remote-reference', '/properties/a/$ref'],
  ['reference to nothing', schemaJson({ a: { $ref: '#/$defs/gain' } }), 'reference-to-nothing', '/properties/a/$ref'],
  ['cyclic reference', schemaJson({ a: { $ref: '#/$defs/b' } }, {}, { $defs: { b: { $ref: '#/$defs/c' }, c: { $ref: '#/$defs/b' } } }), 'cyclic-reference', '/$defs/b/$ref'],
  ['reference to the root', schemaJson({ a: { $ref: '#' } }), 'cyclic-reference', '/properties/a/$ref'],
  ['unused cycle', schemaJson({}, {}, { $defs: { a: { allOf: [{ $ref: '#/$defs/a' }] } } }), 'cyclic-reference', '/$defs/a/allOf/0/$ref'],
  ['dynamic reference', schemaJson({ a: { $dynamicRef: '#meta' } }), 'reference-not-allowed', '/properties/a/$dynamicRef'],
  ['hostile expression', schemaJson({ a: { ...u8(0), pattern: '^(a+)+$' } }), 'regular-expression', '/properties/a/pattern'],
  ['hostile names', schemaJson({}, {}, { patternProperties: { '(a|a)*$': {} } }), 'regular-expression', '/patternProperties'],
  ['expression hidden in a definition', schemaJson({}, {}, { $defs: { x: { items: { pattern: '(x+x+)+y' } } } }), 'regular-expression', '/$defs/x/items/pattern'],
  ['rule over an unknown parameter', rule({ properties: { b: { const: 1 } } }), 'unknown-parameter', '/allOf/0/properties/b'],
  ['rule with an unknown word', rule({ properties: { a: { contains: 1 } } }), 'unknown-key', '/allOf/0/properties/a/contains'],
  ['carry to an unknown parameter', schemaJson({ a: u8(0) }, {}, { 'x-carry': { from: '1.0.0', renames: { old: 'b' } } }), 'unknown-parameter', '/x-carry/renames/old'],
  ['carry from no version', schemaJson({}, {}, { 'x-carry': { from: 'before' } }), 'bad-version', '/x-carry/from'],
]

describe('refused schemas', () => {
  it.each(REFUSED)('%s', (_name, json, code, pointer) => {
    const check = checkParameterSchema(json)
    expect(check.kind === 'refused' ? check.problems[0] : check).toMatchObject({ code, pointer })
  })

  it('tells all problems at once', () => {
    const check = checkParameterSchema(schemaJson({ a: u8(0, { scale: 0 }), b: { type: 'string' }, c: { ...u8(900), 'x-rolle': 'x' } }))
    expect(check.kind === 'refused' ? check.problems.map((p) => p.pointer) : []).toEqual(
      expect.arrayContaining(['/properties/a/x-register/scale', '/properties/b/type', '/properties/c/x-rolle']),
    )
  })

  it('refuses nesting without end, as value and as text', () => {
    let deep: unknown = {}
    for (let k = 0; k < 5000; k += 1) deep = { not: deep }
    expect(readParameterSchema(schemaJson({}, {}, { not: deep }))).toMatchObject({ kind: 'refused', problems: [{ code: 'too-deep' }] })
    expect(checkParameterSchemaText('['.repeat(100_000))).toMatchObject({ kind: 'refused', problems: [{ code: 'not-json', line: 1, column: 42 }] })
  })

  it('has no answer that a hostile reference chain could make slow', () => {
    const $defs = Object.fromEntries(Array.from({ length: 25 }, (_, k) => [`d${k}`, { allOf: [{ $ref: `#/$defs/d${k + 1}` }, { $ref: `#/$defs/d${k + 1}` }] }]))
    expect(readParameterSchema(schemaJson({ a: u8(0) }, {}, { $defs: { ...$defs, d25: true } })).kind).toBe('schema')
  })
})

describe('places in the text', () => {
  it('gives line and column of the key', () => {
    const text = '{\n  "x-image": { "length": 4 },\n  "properties": {\n    "a": { "type": "integer", "default": 0,\n      "x-register": { "address": 9, "encoding": "u8" } }\n  }\n}'
    expect(checkParameterSchemaText(text)).toEqual({
      kind: 'refused',
      problems: [{ pointer: '/properties/a/x-register/address', code: 'outside-image', message: 'a at 0x09 lies outside the image, 0x00–0x03.', line: 5, column: 23 }],
    })
  })

  it('refuses a key that stands twice, with its place', () => {
    expect(checkParameterSchemaText('{ "x-image": {},\n "x-image": {} }')).toMatchObject({ problems: [{ line: 2, column: 2, code: 'not-json' }] })
  })

  it('keeps the digits of a scale that no double holds', () => {
    const text = JSON.stringify(schemaJson({ a: u8(0, { scale: 7 }) })).replace('"scale":7', '"scale":0.1000000000000000055')
    const check = checkParameterSchemaText(text)
    expect(check.kind === 'schema' ? check.schema.byName.get('a')?.register?.scale : check).toBe('0.1000000000000000055')
  })
})

it('lets a name be a keyword’s, and a leaf follow a local reference', () => {
  const schema = aSchema(
    { pattern: { $ref: '#/$defs/gain', title: 'Own title', 'x-register': { address: 0, encoding: 'u8' } }, properties: u8(1) },
    {},
    { $defs: { gain: { $ref: '#/$defs/base', maximum: 9 }, base: { type: 'number', title: 'Base', default: 4 } } },
  )
  expect(schema.byName.get('pattern')).toMatchObject({ title: 'Own title', default: 4, bounds: { maximum: { text: '9' } } })
  expect(schema.parameters).toHaveLength(2)
})

it('advises on a bound that the register cannot reach', () => {
  expect(aSchema({ a: { ...number({ encoding: 'q0.7' }), maximum: 1 } }).advice).toMatchObject([{ code: 'bound-beyond-register', pointer: '/properties/a/maximum' }])
})
