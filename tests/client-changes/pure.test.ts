import { Ajv } from 'ajv'
import { describe, expect, it } from 'vitest'
import { DriveTrain } from '../../shared/parameters/machine-set.ts'
import { byLaw, lawOf, laws } from '../../shared/parameters/laws.ts'
import { ROLES } from '../../shared/registers/roles.ts'
import type { CheckView, Finding } from '../../shared/contract/checks.ts'
import { letterLines, partOf, toleranceOf, withPart } from '../../src/features/changes/drive-train-letters.ts'
import { placeWords } from '../../src/features/changes/place-words.ts'
import { submitNeeds, unfitJoints } from '../../src/features/changes/submit-needs.ts'
import { textMarkers } from '../../src/features/changes/text-markers.ts'
import { textSchema } from '../../src/features/changes/text-schema.ts'
import { heldText, readTyped, registerText } from '../../src/features/changes/typed-value.ts'
import { jointsOf, ownValuesOf, parametersOfFamily, valueAtPlace } from '../../src/features/changes/value-cells.ts'
import { aChange, aSet, schemas } from './a-change.ts'

const hinge = schemas['hinge 2.1.0']
const parameter = (name: string) => hinge.byName.get(name)!
const set = aSet()

describe('laws', () => {
  it('gives every role a law, and keeps their order', () => {
    for (const role of ROLES) expect(lawOf(role)).not.toBe('other')
    const groups = byLaw(hinge.parameters)
    expect(groups.map((g) => g.law)).toEqual([...laws])
    expect(groups[1].things.map((p) => p.name)).toEqual(['velocityGain', 'velocityIntegralGain', 'velocityWindow'])
    expect(groups.flatMap((g) => g.things)).toHaveLength(hinge.parameters.length)
  })
})

describe('typed values', () => {
  it.each([
    ['currentLimit', '350 mA', 0.35],
    ['currentLimit', '2.8', 2.8],
    ['currentLimit', '2.80 A', 2.8],
    ['encoderOffset', '0.5 turn', 180],
    ['positionMax', '12 deg', 0.209439510239],
    ['busWatchdog', '0.25 s', 250],
    ['supplyCompensated', 'on', true],
    ['controlMode', 'velocity', 'velocity'],
    ['velocityGain', '0.1234567890123456789', '0.1234567890123456789'],
  ])('%s: %s', (name, text, value) => expect(readTyped(parameter(name), text)).toEqual({ kind: 'value', value }))

  it.each([
    ['velocityWindow', '72', /above the maximum 64/],
    ['velocityWindow', '7.5', /whole number/],
    ['currentLimit', '3 V', /^"V" does not fit a value in A\.$/],
    ['currentLimit', '3,2', /decimal comma/],
    ['currentLimit', '', /does not begin with a number/],
    ['controlMode', 'torque', /one of position, velocity, current/],
  ])('%s: %s is refused in words', (name, text, words) => {
    const read = readTyped(parameter(name), text)
    expect(read.kind === 'refused' && read.message).toMatch(words)
  })

  it('says what the register makes of it', () => {
    expect(heldText(parameter('currentLimit'), 2.8)).toBe('held exactly')
    expect(heldText(parameter('velocityGain'), 5.6)).toMatch(/^held as 5\.6\d*, 0\.0+\d+ % off$/)
    expect(registerText(parameter('velocityGain'))).toBe('0x24, q7.24')
    expect(registerText(parameter('supplyCompensated'))).toBe('0x05, u8, bit 2')
  })
})

describe('values at their places', () => {
  const at = (joint: string, name: string, now = set) => valueAtPlace(now, set, { kind: 'joint', joint, family: 'knee' }, parameter(name), schemas)!

  it('resolves firmware, family and joint, with the released value of the same place', () => {
    expect(at('l1-knee', 'velocityGain')).toMatchObject({ value: 3.2, origin: 'family', own: undefined, released: 3.2, changed: false })
    expect(at('r3-knee', 'velocityGain')).toMatchObject({ value: 2.9, origin: 'joint', own: 2.9 })
    expect(at('l1-knee', 'outputDelay')).toMatchObject({ value: 1, origin: 'firmware' })
    const { velocityGain: _gone, ...rest } = set.joints['r3-knee'].values
    const given = { ...set, joints: { ...set.joints, 'r3-knee': { ...set.joints['r3-knee'], values: rest } } }
    expect(at('r3-knee', 'velocityGain', given)).toMatchObject({ value: 3.2, origin: 'family', released: 2.9, changed: true, originChanged: true, pointer: '/joints/r3-knee/values/velocityGain' })
  })

  it('knows the family: its joints by bus and address, its parameters, who departs', () => {
    expect(jointsOf(set, 'knee')).toEqual(['l1-knee', 'r3-knee'])
    expect(ownValuesOf(set, 'knee', 'velocityGain')).toEqual([{ joint: 'r3-knee', value: 2.9 }])
    const names = parametersOfFamily(set, 'knee', schemas).map((p) => p.name)
    expect(names).toContain('velocityGain')
    for (const left of ['busAddress', 'windingTemperature', 'encoderResolution']) expect(names).not.toContain(left)
  })
})

describe('the drive train', () => {
  it('has a line for every letter and says which are needed', () => {
    expect(letterLines.map((l) => l.letter).sort()).toEqual(Object.keys(DriveTrain.properties).sort())
    expect(letterLines.filter((l) => l.needed).map((l) => l.letter).sort()).toEqual([...DriveTrain.required!].sort())
    const bounded = Object.entries(DriveTrain.properties).filter(([, t]) => 'anyOf' in t && t.anyOf.some((s: { type?: string }) => s.type === 'object')).map(([k]) => k)
    expect(letterLines.filter((l) => l.bounded).map((l) => l.letter).sort()).toEqual(bounded.sort())
  })

  it('sets one part and keeps the others holding', () => {
    expect(withPart(2, 'low', 1.5)).toEqual({ value: 2, low: 1.5, high: 2 })
    expect(withPart({ value: 2, low: 1.5, high: 2.5 }, 'value', 3)).toEqual({ value: 3, low: 1.5, high: 3 })
    expect(withPart({ value: 2, low: 1.5, high: 2.5 }, 'high', undefined)).toBe(2)
    expect(partOf({ value: 2, low: 1.5, high: 2.5 }, 'high')).toBe(2.5)
    expect(toleranceOf({ value: 2, low: 1.4, high: 3.2 })).toEqual({ low: expect.closeTo(-30, 9), high: expect.closeTo(60, 9) })
  })
})

describe('the text', () => {
  const validate = new Ajv({ strict: false }).compile(textSchema(set, schemas))
  const shown = (over: (s: ReturnType<typeof aSet>) => void) => {
    const copy = aSet()
    over(copy)
    return JSON.parse(JSON.stringify(copy)) as unknown
  }

  it('has a schema that takes the set, with addresses in either form', () => {
    expect(validate(shown(() => {}))).toBe(true)
    expect(validate(shown((s) => Object.assign(s.joints['l1-knee'], { address: '0x33' })))).toBe(true)
  })

  it.each([
    ['a value past its range', (s: ReturnType<typeof aSet>) => void (s.families.knee.values.velocityWindow = 72)],
    ['an unknown parameter', (s: ReturnType<typeof aSet>) => void (s.joints['l1-knee'].values.speedGain = 1)],
    ['a bus that is not there', (s: ReturnType<typeof aSet>) => void (s.joints['l1-knee'].bus = 'mid')],
    ['a letter of the wrong sign', (s: ReturnType<typeof aSet>) => void (s.families.knee.driveTrain.L = -1)],
  ])('marks %s', (_, over) => expect(validate(shown(over))).toBe(false))

  it('puts unit, range, register and rounding into the hover', () => {
    const schema = textSchema(set, schemas) as { properties: { families: { properties: { knee: { properties: { values: { properties: { velocityGain: { description: string } } } } } } } } }
    const { description } = schema.properties.families.properties.knee.properties.values.properties.velocityGain
    expect(description).toContain('A·s/rad, 0 to 8')
    expect(description).toContain('register 0x24, q7.24')
    expect(description).toContain('held as 3.19999999, 0.00000037 % off')
  })

  it('marks findings at their line, an inherited value at what holds it', () => {
    const change = aChange()
    const finding = (pointer: string): Finding => ({ key: 'k', kind: 'closed loop', level: 'block', joints: [], value: null, limit: null, unit: '', text: 'Unstable.', remedy: 'Lower it.', source: '', pointer })
    const [gain, delay] = textMarkers(change.text, [], [finding('/families/knee/values/velocityGain'), finding('/families/knee/values/outputDelay')])
    expect(change.text.split('\n')[gain.line - 1]).toContain('"velocityGain": 3.2')
    expect(gain.message).toBe('Unstable. Lower it.')
    expect(change.text.split('\n')[delay.line - 1]).toContain('"values": {')
  })
})

describe('words for places', () => {
  it.each([
    ['/families/knee/values/velocityGain', 'Velocity gain of the Knee family'],
    ['/families/knee/driveTrain/J_load', 'load inertia at the output of the Knee family'],
    ['/joints/r3-knee/address', 'address of R3 knee'],
    ['/joints/r3-knee', 'R3 knee'],
    ['/buses/aft/pullUp', 'pull-up of the bus aft'],
  ])('%s', (pointer, words) => expect(placeWords(pointer, [set], schemas)).toBe(words))
})

describe('what is needed before submitting', () => {
  const finding: Finding = { key: 'phase margin/velocity/knee', kind: 'phase margin', level: 'concession needed', joints: ['l1-knee'], value: 33, limit: 35, unit: '°', text: '', remedy: '', source: '' }
  const check = (over: Partial<CheckView>): CheckView => ({ inputsHash: '', modelVersion: '1', policyNumber: 1, joints: [], findings: [], counts: { pass: 1, advise: 0, 'concession needed': 0, block: 0 }, verdict: 'stable', checkedAt: '', complete: true, progress: { done: 1, total: 1, state: 'done', problem: '' }, ...over })
  const needs = (over: Partial<Parameters<typeof submitNeeds>[0]>) => submitNeeds({ change: aChange(), set, saving: 'saved', check: check({}), stale: false, unfit: unfitJoints(over.set ?? set, schemas), ...over })

  it('is all met', () => expect(needs({}).map((n) => `${n.state}: ${n.words}`)).toEqual(['met: values fit the schema on 3 joints', 'met: check is fresh, nothing blocks', 'met: the reason is written']))
  it('names what is open', () => {
    const bad = aSet()
    bad.families.knee.values.velocityWindow = 72
    const words = needs({ set: bad, change: aChange({ reason: ' ' }), saving: 'lost', check: check({ findings: [finding], counts: { pass: 0, advise: 0, 'concession needed': 1, block: 2 } }) }).map((n) => `${n.state}: ${n.words}`)
    expect(words).toEqual(["open: not everything is saved yet", "open: values don't fit the schema on L1 knee, R3 knee", 'open: 2 findings block', 'open: 1 concession still to be requested', 'open: the reason is still to be written'])
  })
  it('waits for a fresh check', () => expect(needs({ stale: true }).find((n) => n.words.includes('check'))?.state).toBe('waiting'))
  it('waits for the tolerances, and says when nobody walks them', () => {
    const walking = (state: 'running' | 'stopped') => needs({ check: check({ complete: false, progress: { done: 12, total: 256, state, problem: '' } }) })[1]
    expect(walking('running')).toMatchObject({ state: 'waiting', words: 'the check is walking over the tolerances' })
    expect(walking('stopped')).toMatchObject({ state: 'open', words: 'the check is not complete: go on with it' })
  })
  it('takes a concession as requested', () => {
    const change = aChange({ concessions: [{ finding: finding.key, characteristic: 'x', limit: 'x', reason: 'x', until: null, count: 5 }] })
    expect(needs({ change, check: check({ findings: [finding] }) }).map((n) => n.words)).toContain('1 concession requested')
  })
})
