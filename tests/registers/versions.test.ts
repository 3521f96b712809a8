import { Ajv2020 } from 'ajv/dist/2020.js'
import { describe, expect, it } from 'vitest'
import metaSchema from '../../schemas/parameter-schema.json' with { type: 'json' }
import vocabulary from '../../schemas/register-vocabulary.json' with { type: 'json' }
import { carryOver } from '../../shared/registers/carry-over.ts'
import { checkParameterSchemaText } from '../../shared/registers/check-parameter-schema.ts'
import { compareSchemas } from '../../shared/registers/compare-schemas.ts'
import { encodeImage } from '../../shared/registers/encode-image.ts'
import { addRegisterVocabulary } from '../../shared/registers/register-vocabulary.ts'
import { roleValues } from '../../shared/registers/role-values.ts'
import { ROLES } from '../../shared/registers/roles.ts'
import { FIRMWARE, firmware, firmwareJson, firmwareText } from './a-schema.ts'

describe('the example firmware lines', () => {
  it.each(FIRMWARE)('%s passes the check without advice, and its defaults encode', (name) => {
    expect(checkParameterSchemaText(firmwareText(name))).toMatchObject({ kind: 'schema', advice: [] })
    expect(encodeImage(firmware(name), {}, { release: 1 }).kind).toBe('image')
  })

  it('between them hold every role', () => {
    const roles = new Set(FIRMWARE.flatMap((name) => [...firmware(name).byRole.keys()]))
    expect([...ROLES].filter((role) => !roles.has(role))).toEqual([])
  })

  it('give roles in SI from decoded values', () => {
    const schema = firmware('capstan-1.3.0')
    const result = encodeImage(schema, { speedLimit: 60, dutyLimit: 95 }, { release: 0 })
    const roles = roleValues(schema, result.kind === 'image' ? result.decoded : {})
    expect(roles.get('speed.limit')?.si).toBeCloseTo(2 * Math.PI, 14)
    expect(roles.get('duty.limit')?.si).toBe(0.95)
    expect(roles.get('pwm.frequency')?.si).toBe(30000)
    expect(roles.get('velocity.ki')).toMatchObject({ perTick: 'outer', si: Math.fround(0.01) })
    expect(roles.get('encoder.direction')).toMatchObject({ value: 1, si: null })
  })
})

describe('vocabulary', () => {
  it('lists the roles that the program knows, no others', () => {
    expect(vocabulary.$defs.role.enum).toEqual([...ROLES])
  })

  it('lets Ajv compile a parameter schema and checks the annotations while it does', () => {
    const ajv = new Ajv2020({ strict: false })
    addRegisterVocabulary(ajv)
    ajv.addMetaSchema(metaSchema)
    const json = firmwareJson('hinge-2.1.0')
    const validate = ajv.compile(json)
    expect(validate({ velocityGain: 5 })).toBe(true)
    expect(validate({ velocityGain: 9 })).toBe(false)
    const broken = { ...json, $id: 'urn:detent:firmware:broken:1.0.0', properties: { a: { type: 'number', 'x-role': 'torque' } } }
    expect(() => ajv.compile(broken)).toThrow(/schema is invalid/)
  })

  it('has an $id of its own in every schema file', () => {
    expect([metaSchema.$id, vocabulary.$id]).toEqual(['https://detent.example/schemas/parameter-schema.json', 'https://detent.example/schemas/register-vocabulary.json'])
  })
})

describe('carrying over', () => {
  const from = firmware('hinge-2.0.0')
  const to = firmware('hinge-2.1.0')
  const options = { from, fromVersion: '2.0.0', to, addDefaults: true }

  it('renames, changes units, adds what is new', () => {
    // 57.3·π/30 to 50 places, then the nearest double (Python 3.11 decimal)
    const carried = carryOver({ watchdog: 300, speedLimit: 57.3, velocityGain: 3.2 }, options)
    expect(carried.problems).toEqual([])
    expect(carried.values).toEqual({
      busWatchdog: 300, speedLimit: 6.000441968356505, velocityGain: 3.2, accelerationLimit: 60, softStart: 0.8, positionFilter: 0, storeCommand: 'store',
    })
    expect(carried.steps.map((s) => s.kind)).toEqual(['renamed', 'converted', 'kept', 'added', 'added', 'added', 'added'])
    expect(carried.steps[1]).toMatchObject({ before: 57.3, rounded: true })
    expect(encodeImage(to, carried.values, { release: 0 }).kind).toBe('image')
  })

  it('leaves a joint’s own values its own', () => {
    expect(carryOver({ watchdog: 300 }, { ...options, addDefaults: false }).values).toEqual({ busWatchdog: 300 })
  })

  it('changes mA to A exactly', () => {
    const carried = carryOver({ currentLimit: 3333 }, { from: firmware('capstan-1.2.0'), fromVersion: '1.2.0', to: firmware('capstan-1.3.0'), addDefaults: false })
    expect(carried).toMatchObject({ values: { currentLimit: 3.333 }, steps: [{ kind: 'converted', rounded: false }] })
  })

  it('tells what has no place or breaks the new schema', () => {
    const carried = carryOver({ oldLamp: 3, speedLimit: 195 }, options)
    expect(carried.problems.map((p) => [p.parameter, p.code])).toEqual([['oldLamp', 'unknown-parameter'], ['speedLimit', 'above-maximum']])
  })

  it('refuses rules of another version', () => {
    expect(() => carryOver({}, { ...options, fromVersion: '1.9.0' })).toThrow(/from 1\.9\.0, only from 2\.0\.0/)
  })
})

it('compares two versions: added, renamed, rescaled, and the image', () => {
  const { parameters, image } = compareSchemas(firmware('hinge-2.0.0'), firmware('hinge-2.1.0'))
  const byName = Object.fromEntries(parameters.map((p) => [p.parameter, p]))
  expect(byName.accelerationLimit).toMatchObject({ kind: 'added' })
  expect(byName.busWatchdog).toMatchObject({ kind: 'changed', renamedFrom: 'watchdog', aspects: [] })
  expect(byName.velocityGain.aspects.map((a) => a.aspect)).toEqual(['place', 'encoding', 'bounds'])
  expect(byName.speedLimit.aspects.map((a) => a.aspect)).toEqual(['scale', 'unit', 'bounds', 'default'])
  expect(parameters.filter((p) => p.kind === 'removed')).toEqual([])
  expect(image).toEqual([{ setting: 'layoutId', before: '18464 at 0x00–0x01', after: '18465 at 0x00–0x01' }])
  expect(compareSchemas(firmware('hinge-2.1.0'), firmware('hinge-2.0.0')).parameters.filter((p) => p.kind === 'removed').map((p) => p.parameter)).toContain('softStart')
})
