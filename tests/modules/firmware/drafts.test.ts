import { createHash } from 'node:crypto'
import canonicalize from 'canonicalize'
import { describe, expect, it } from 'vitest'
import type { FirmwareVersionView } from '../../../shared/contract/firmware.ts'
import { aFirmware } from '../../support/a-firmware.ts'
import { lastEntries } from '../../support/ledger.ts'
import { smallSchema, smallSchemaText } from '../../support/small-schema.ts'
import { aWorkplace, type SignedIn, type Workplace } from '../../support/workplace.ts'

const path = '/api/firmware/hinge/versions'
const draft = { version: '2.1.0', schemaText: smallSchemaText, notes: 'Filter window in hardware.' }

async function anEngineer(): Promise<{ w: Workplace; engineer: SignedIn }> {
  const w = await aWorkplace()
  const engineer = await w.as('controls engineer')
  await engineer.post('/api/firmware', { key: 'hinge', name: 'Hinge', description: '' }).expect(201)
  return { w, engineer }
}

describe('drafting a firmware version', () => {
  it('keeps the text as written, hashes the schema in RFC 8785 form, and counts its parameters', async () => {
    const { w, engineer } = await anEngineer()
    const text = `// layout of the small board\n${smallSchemaText}`
    const made = await engineer.post(path, { ...draft, schemaText: text }).expect(201)
    const view = made.body as FirmwareVersionView
    expect(made.headers.etag).toBe('"1"')
    expect(view).toMatchObject({
      line: 'hinge', lineName: 'Hinge', version: '2.1.0', state: 'draft', schemaText: text, notes: draft.notes, revision: 1, parameters: 8, imageBytes: 32,
      uploadedBy: engineer.me.name, writers: [engineer.me.name], publishedBy: null, image: { base: 0, length: 32, addressWidth: 8 },
      schemaHash: createHash('sha256').update(canonicalize(smallSchema)!).digest('hex'),
    })
    expect(view.may).toMatchObject({ edit: { allowed: true }, publish: { allowed: false }, retire: { allowed: false, why: 'It is draft.' } })
    expect(await lastEntries(w)).toMatchObject([{ act: 'firmware drafted', subject: { firmware: 'hinge 2.1.0' }, details: { schemaHash: view.schemaHash } }])
  })

  it('tells each parameter in short, by register address, constants last', async () => {
    const { engineer } = await anEngineer()
    await engineer.post(path, draft).expect(201)
    const view = (await engineer.get('/api/firmware/hinge/2.1.0').expect(200)).body as FirmwareVersionView
    expect(view.parameterList.map((p) => p.name)).toEqual(['busAddress', 'controlMode', 'velocityGain', 'currentLimit', 'encoderOffset', 'boardTemperature', 'storeCommand', 'outerRate'])
    expect(view.parameterList[2]).toEqual({
      name: 'velocityGain', title: 'Velocity gain', unit: 'A·s/rad', kind: 'number', role: 'velocity.kp', boardBound: false, default: 0.25, minimum: 0, maximum: 8, choices: null,
      register: { address: 4, bytes: 4, encoding: 'q7.24', access: 'rw', bit: null, width: null },
    })
    expect(view.parameterList[4]).toMatchObject({ boardBound: true, register: { encoding: 'f32' } })
    expect(view.parameterList[5]).toMatchObject({ default: null, register: { access: 'ro' } })
    expect(view.parameterList[7]).toMatchObject({ name: 'outerRate', default: 1000, register: null })
  })

  it.each([
    ['two registers on one byte', { ...smallSchema.properties.controlMode, 'x-register': { address: 0, encoding: 'u8', values: { position: 0, velocity: 1 } } }, /^\/properties\/controlMode\/x-register/],
    ['an encoding that is none', { ...smallSchema.properties.controlMode, 'x-register': { address: 1, encoding: 'u24', values: { position: 0, velocity: 1 } } }, /^\/properties\/controlMode\/x-register\/encoding$/],
    ['a role twice', { ...smallSchema.properties.controlMode, 'x-role': 'bus.address' }, /^\/properties\/controlMode/],
  ])('refuses a schema with %s, naming line and pointer', async (_what, controlMode, pointer) => {
    const { engineer } = await anEngineer()
    const schemaText = JSON.stringify({ ...smallSchema, properties: { ...smallSchema.properties, controlMode } }, null, 2)
    const refused = await engineer.post(path, { ...draft, schemaText }).expect(422)
    expect(refused.body).toMatchObject({ type: '/problems/content-invalid', title: 'The values do not fit the schema' })
    const fields = refused.body.errors as { pointer: string; detail: string }[]
    const first = schemaText.split('\n').findIndex((line) => line.includes('"controlMode"')) + 1
    const told = fields.find((f) => pointer.test(f.pointer))
    const line = Number(/^line (\d+), column \d+: ./.exec(told!.detail)![1])
    expect(line).toBeGreaterThanOrEqual(first)
    expect(line).toBeLessThan(first + 20)
    await engineer.get('/api/firmware/hinge/2.1.0').expect(404)
  })

  it('refuses text that is no JSON at the place where it breaks', async () => {
    const { engineer } = await anEngineer()
    const refused = await engineer.post(path, { ...draft, schemaText: '{\n  "title": "small",\n  "type" "object"\n}' }).expect(422)
    expect(refused.body.errors).toEqual([{ pointer: '', detail: expect.stringMatching(/^line 3, column 10: /) }])
    expect(refused.body.detail).toContain('what you typed is still with you')
  })

  it.each([['a lone half of a surrogate pair', '\ud83d'], ['a NUL', '\0']])('refuses %s, which the database would not give back', async (_what, character) => {
    const { engineer } = await anEngineer()
    const refused = await engineer.post(path, { ...draft, schemaText: `{}\n// ${character}` }).expect(400)
    expect(refused.body.errors).toEqual([{ pointer: '/schemaText', detail: expect.stringContaining("can't keep") }])
  })

  it('refuses a control character at its place', async () => {
    const { engineer } = await anEngineer()
    const refused = await engineer.post(path, { ...draft, schemaText: '{}\n// \u0001' }).expect(422)
    expect(refused.body.errors).toEqual([{ pointer: '', detail: expect.stringMatching(/^line 2, column 4: /) }])
  })

  it('keeps characters outside the basic plane', async () => {
    const { engineer } = await anEngineer()
    const schemaText = smallSchemaText.replace('Velocity gain', 'Velocity gain 𝐾ᵥ')
    await engineer.post(path, { ...draft, schemaText }).expect(201)
    expect((await engineer.get('/api/firmware/hinge/2.1.0')).body.schemaText).toBe(schemaText)
  })

  it.each(['2.1', '02.1.0', 'v2.1.0', '2.1.0+build.7', '2.1.0 '])('refuses the version "%s"', async (version) => {
    const { engineer } = await anEngineer()
    const refused = await engineer.post(path, { ...draft, version: version.padEnd(5, ' ') }).expect(422)
    expect(refused.body).toMatchObject({ type: '/problems/version-refused', errors: [{ pointer: '/version' }] })
  })

  it('refuses a version that exists; the same request repeated under its key is answered again', async () => {
    const { engineer } = await anEngineer()
    const first = await engineer.post(path, draft).set('Idempotency-Key', 'draft-hinge-210').expect(201)
    const again = await engineer.post(path, draft).set('Idempotency-Key', 'draft-hinge-210').expect(201)
    expect(again.body).toEqual(first.body)
    await engineer.post(path, { ...draft, notes: 'Another.' }).set('Idempotency-Key', 'draft-hinge-210').expect(409)
    expect((await engineer.post(path, draft).expect(409)).body).toMatchObject({ type: '/problems/already-exists' })
  })

  it('refuses unknown fields and wrong types, all at once', async () => {
    const { engineer } = await anEngineer()
    const refused = await engineer.post(path, { version: 210, schemaText: smallSchemaText, state: 'published' }).expect(400)
    expect(refused.body.errors.map((e: { pointer: string }) => e.pointer).sort()).toEqual(['/notes', '/state', '/version'])
  })

  it('is refused to a release manager, and for a line that does not exist', async () => {
    const { w, engineer } = await anEngineer()
    await (await w.as('release manager')).post(path, draft).expect(403)
    await engineer.post('/api/firmware/nowhere/versions', draft).expect(404)
  })
})

describe('editing a firmware draft', () => {
  const edited = { schemaText: smallSchemaText.replace('0.25', '0.3'), notes: 'Softer.' }

  it('saves for the state that its writer saw, and makes every writer one of its authors', async () => {
    const { w, engineer } = await anEngineer()
    const before = (await engineer.post(path, draft).expect(201)).body as FirmwareVersionView
    const other = await w.as('controls engineer')
    const saved = await other.put('/api/firmware/hinge/2.1.0', edited).set('If-Match', '"1"').expect(200)
    expect(saved.headers.etag).toBe('"2"')
    expect(saved.body).toMatchObject({ ...edited, revision: 2, uploadedBy: engineer.me.name, writers: [engineer.me.name, other.me.name] })
    expect(saved.body.schemaHash).not.toBe(before.schemaHash)
    expect(await lastEntries(w)).toMatchObject([{ act: 'firmware edited', personName: other.me.name, details: { schemaHashBefore: before.schemaHash, schemaHash: saved.body.schemaHash } }])
    const twice = await other.put('/api/firmware/hinge/2.1.0', edited).set('If-Match', '"2"').expect(200)
    expect(twice.body.writers).toHaveLength(2)
  })

  it('is refused on a state that was altered meanwhile, and without one', async () => {
    const { engineer } = await anEngineer()
    await engineer.post(path, draft).expect(201)
    await engineer.put('/api/firmware/hinge/2.1.0', edited).set('If-Match', '"1"').expect(200)
    const stale = await engineer.put('/api/firmware/hinge/2.1.0', { schemaText: smallSchemaText, notes: '' }).set('If-Match', '"1"').expect(412)
    expect(stale.body).toMatchObject({ type: '/problems/precondition-failed', revision: 2 })
    await engineer.put('/api/firmware/hinge/2.1.0', edited).expect(428)
    expect((await engineer.get('/api/firmware/hinge/2.1.0')).body).toMatchObject(edited)
  })

  it('leaves the draft as it was when the schema is refused', async () => {
    const { engineer } = await anEngineer()
    await engineer.post(path, draft).expect(201)
    await engineer.put('/api/firmware/hinge/2.1.0', { schemaText: '{}', notes: '' }).set('If-Match', '"1"').expect(422)
    expect((await engineer.get('/api/firmware/hinge/2.1.0')).body).toMatchObject({ schemaText: smallSchemaText, revision: 1 })
  })

  it.each(['published', 'retired'] as const)('is refused once it is %s', async (state) => {
    const w = await aWorkplace()
    await aFirmware(w, { state })
    const engineer = await w.as('controls engineer')
    const refused = await engineer.put('/api/firmware/hinge/2.1.0', edited).set('If-Match', '"1"').expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/wrong-state', detail: expect.stringContaining('draft a new version') })
    expect((await engineer.get('/api/firmware/hinge/2.1.0')).body).toMatchObject({ state, revision: 1, may: { edit: { allowed: false } } })
  })
})
