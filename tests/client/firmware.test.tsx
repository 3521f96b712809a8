// @vitest-environment jsdom
import './setup-dom.ts'
import { readFileSync } from 'node:fs'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { Ajv2020 } from 'ajv/dist/2020.js'
import { describe, expect, it, vi } from 'vitest'
import type { FirmwareLineView, FirmwareVersionView } from '../../shared/contract/firmware.ts'
import { expectParameterSchema } from '../../shared/registers/read-parameter-schema.ts'
import type { JsonEditorProps } from '../../src/components/editor/editor-props.ts'
import { addressRows, wordName } from '../../src/features/firmware/address-rows.ts'
import { schemaOfSchemas } from '../../src/features/firmware/editor-schema.ts'
import { firstSchema } from '../../src/features/firmware/first-schema.ts'
import { readDraft } from '../../src/features/firmware/read-draft.ts'
import { smallSchema, smallSchemaText } from '../support/small-schema.ts'
import { anEngineer, aMe, fakeServer, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

// The editor itself needs a laid-out page; the browser tests drive it. Here a plain field stands for it.
vi.mock('../../src/components/editor/json-editor.tsx', () => ({
  JsonEditor: ({ label, value, onChange, readOnly, markers = [] }: JsonEditorProps) => (
    <>
      <textarea aria-label={label} readOnly={readOnly} value={value} onChange={(e) => onChange?.(e.target.value)} />
      <output aria-label="marks">{markers.map((m) => `${m.line}:${m.column} ${m.message}`).join('\n')}</output>
    </>
  ),
}))

const yes = { allowed: true } as const
const no = (why: string) => ({ allowed: false, why }) as const
const schema = expectParameterSchema(smallSchema)

const aVersion = (over: Partial<FirmwareVersionView> = {}): FirmwareVersionView => ({
  line: 'small', version: '1.0.0', state: 'draft', schemaHash: 'a'.repeat(64), uploadedBy: 'Mirela Castanho', publishedBy: null, publishedAt: null, parameters: schema.parameters.length, imageBytes: 32, firmwareImage: null,
  lineName: 'Small', schemaText: smallSchemaText, notes: '', revision: 4, writers: ['Mirela Castanho'], createdAt: '2026-11-30T09:00:00Z', retiredBy: null, retiredAt: null,
  parameterList: [
    { name: 'busAddress', title: 'Bus address', unit: '', kind: 'integer', role: 'bus.address', boardBound: false, default: 64, minimum: 8, maximum: 119, choices: null, register: { address: 0, bytes: 1, encoding: 'u8', access: 'rw', bit: null, width: null } },
    { name: 'velocityGain', title: 'Velocity gain', unit: 'A·s/rad', kind: 'number', role: 'velocity.kp', boardBound: false, default: 0.25, minimum: 0, maximum: 8, choices: null, register: { address: 4, bytes: 4, encoding: 'q7.24', access: 'rw', bit: null, width: null } },
  ],
  image: { base: 0, length: 32, addressWidth: 8 }, advice: [], may: { edit: yes, publish: no('You wrote in it; another release manager does this.'), retire: no('It is draft.'), downloadImage: no('There is no image.') }, ...over,
})
const aLine = (): FirmwareLineView => ({ key: 'small', name: 'Small', description: 'a board for tests', versions: [aVersion()], may: { draftVersion: yes, describe: yes } })
const frame = { 'GET /me': anEngineer, 'GET /machines': [], 'GET /firmware': [aLine()], 'GET /firmware/small/1.0.0': aVersion() }
const press = (name: string) => fireEvent.click(screen.getByRole('button', { name }))
const editor = () => screen.getByLabelText<HTMLTextAreaElement>('parameter schema of small 1.0.0')
const write = (text: string) => fireEvent.change(editor(), { target: { value: text } })

describe('the address space', () => {
  it('gives every byte of the image to one stretch, in order', () => {
    const rows = addressRows(schema)
    let at = 0
    for (const row of rows) {
      const stretches = row.kind === 'free' ? [row] : row.stretches
      for (const s of stretches) {
        expect(s.address).toBe(at)
        at += s.bytes
      }
    }
    expect(at).toBe(32)
  })

  it('puts words where they lie, cuts them at the end of a row, and tells empty rows together', () => {
    const word = (address: number, bytes: number) => ({ ...schema.words[0], address, bytes })
    const rows = addressRows({ image: { ...schema.image, base: 8, length: 120 }, words: [word(14, 4), word(100, 1)] })
    expect(rows.map((r) => (r.kind === 'free' ? `${r.address} free ${r.bytes}` : `${r.address}: ${r.stretches.map((s) => `${s.word ? 'word' : 'gap'} ${s.address}+${s.bytes}${s.continued ? ' continued' : ''}${s.continues ? ' continues' : ''}`).join(', ')}`))).toEqual([
      '0: gap 8+6, word 14+2 continues',
      '16: word 16+2 continued, gap 18+14',
      '32 free 64',
      '96: gap 96+4, word 100+1, gap 101+11',
      '112 free 16',
    ])
  })

  it('names shared words by their fields and the image’s own registers by what they are', () => {
    const names = addressRows(schema).flatMap((r) => (r.kind === 'bytes' ? r.stretches.flatMap((s) => (s.word ? [wordName(s.word)] : [])) : []))
    expect(names).toContain('Bus address')
    expect(names).toContain('release number')
  })
})

describe('a schema as it is typed', () => {
  it('is marked where it breaks, and where it cannot be used', () => {
    expect(readDraft('{\n  "x-image": {,').marks[0]).toMatchObject({ line: 2 })
    const text = smallSchemaText.replace('"q7.24"', '"q9.99"')
    const marks = readDraft(text).marks
    const line = text.split('\n').findIndex((l) => l.includes('q9.99')) + 1
    expect(marks.length).toBeGreaterThan(0)
    expect(marks.every((m) => m.pointer.startsWith('/properties/velocityGain'))).toBe(true)
    expect(marks.some((m) => m.line === line)).toBe(true)
  })

  it('is helped by a schema of schemas that takes what the real one takes', () => {
    const ajv = new Ajv2020({ strict: false, validateFormats: false })
    const takes = ajv.compile(schemaOfSchemas)
    for (const name of ['hinge-2.0.0', 'hinge-2.1.0', 'capstan-1.2.0', 'capstan-1.3.0']) {
      expect(takes(JSON.parse(readFileSync(`examples/firmware/${name}.schema.json`, 'utf8'))), name).toBe(true)
    }
    expect(takes({ ...smallSchema, 'x-image': { length: 'many' } })).toBe(false)
  })

  it('begins, for a first version, as one that reads well', () => {
    expect(readDraft(firstSchema('small 1.0.0')).schema?.parameters.map((p) => p.name)).toEqual(['busAddress', 'controlMode'])
  })
})

describe('a firmware version', () => {
  it('is drawn as a map whose blocks pick their row', async () => {
    fakeServer(frame)
    const app = openApp('/firmware/small/1.0.0')
    const map = await screen.findByRole('group', { name: /register map/ })
    fireEvent.click(within(map).getByRole('button', { name: /^0x04 to 0x07: Velocity gain, q7.24/ }))
    const table = screen.getByRole('table', { name: 'parameters' })
    expect(within(table).getByRole('row', { selected: true }).textContent).toContain('Velocity gain')
    await waitFor(() => expect(app.here()).toBe('/firmware/small/1.0.0?parameter=velocityGain'))
  })

  it('that is published shows its schema to be read only, and why', async () => {
    fakeServer({ ...frame, 'GET /firmware/small/1.0.0': aVersion({ state: 'published', may: { ...aVersion().may, edit: no('It is published; draft a new version instead.') } }) })
    openApp('/firmware/small/1.0.0?view=schema')
    expect((await screen.findByLabelText<HTMLTextAreaElement>('parameter schema of small 1.0.0')).readOnly).toBe(true)
    expect(screen.getByText('It is published; draft a new version instead.')).toBeTruthy()
    expect(screen.queryByRole('button', { name: 'Save the draft' })).toBeNull()
  })

  it('is saved over the revision it was read at, however often it is read again', async () => {
    let stored = aVersion()
    const server = fakeServer({
      ...frame,
      'GET /firmware/small/1.0.0': () => stored,
      'PUT /firmware/small/1.0.0': (asked: { headers: Record<string, string>; body: unknown }) =>
        asked.headers['If-Match'] === `"${stored.revision}"` ? (stored = aVersion({ ...(asked.body as object), revision: stored.revision + 1 })) : problem(412, 'precondition-failed', 'It was altered since you read it.'),
    })
    openApp('/firmware/small/1.0.0?view=schema')
    await screen.findByLabelText('parameter schema of small 1.0.0')
    const mine = smallSchemaText.replace('"maximum": 6', '"maximum": 5')
    write(mine)
    // Somebody else saves, and this page reads it anew.
    stored = aVersion({ revision: 5, notes: 'theirs' })
    const { queryClient } = await import('../../src/lib/query-client.ts')
    await queryClient.invalidateQueries({ queryKey: ['firmware'] })
    expect(await screen.findByText('Somebody saved this draft while you typed')).toBeTruthy()
    press('Save the draft')
    expect(await screen.findByText('It was altered since you read it.')).toBeTruthy()
    expect(server.acts()[0].headers['If-Match']).toBe('"4"')
    expect(editor().value).toBe(mine)
  })

  it('is saved, says when, and is clean again', async () => {
    let stored = aVersion()
    const server = fakeServer({ ...frame, 'GET /firmware/small/1.0.0': () => stored, 'PUT /firmware/small/1.0.0': (asked: { body: unknown }) => (stored = aVersion({ ...(asked.body as object), revision: 5 })) })
    openApp('/firmware/small/1.0.0?view=schema')
    await screen.findByLabelText('parameter schema of small 1.0.0')
    const mine = smallSchemaText.replace('"maximum": 6', '"maximum": 5')
    write(mine)
    fireEvent.change(screen.getByLabelText('Notes'), { target: { value: 'Less current.' } })
    press('Save the draft')
    expect(await screen.findByText(/^saved/)).toBeTruthy()
    expect(server.acts()).toMatchObject([{ method: 'PUT', body: { schemaText: mine, notes: 'Less current.' } }])
    expect(screen.getByRole('button', { name: 'Save the draft' }).getAttribute('aria-disabled')).toBe('true')
  })

  it('shows where the server found it wrong, and keeps the text', async () => {
    fakeServer({ ...frame, 'PUT /firmware/small/1.0.0': problem(422, 'content-invalid', "The parameter schema can't be used.", { errors: [{ pointer: '/properties/x', detail: 'line 9, column 3: too long' }], problems: [{ line: 9, column: 3, message: 'too long', pointer: '/properties/x' }] }) })
    openApp('/firmware/small/1.0.0?view=schema')
    await screen.findByLabelText('parameter schema of small 1.0.0')
    write(`${smallSchemaText} `)
    press('Save the draft')
    expect(await screen.findByText('line 9, column 3: too long')).toBeTruthy()
    expect(screen.getByLabelText('marks').textContent).toContain('9:3 too long')
    expect(editor().value).toBe(`${smallSchemaText} `)
  })

  it('is not left unsaved unasked', async () => {
    fakeServer(frame)
    const app = openApp('/firmware/small/1.0.0?view=schema')
    await screen.findByLabelText('parameter schema of small 1.0.0')
    write(`${smallSchemaText} `)
    void app.goTo('/machines')
    const dialog = await screen.findByRole('dialog', { name: 'The draft is not saved' })
    fireEvent.click(within(dialog).getByRole('button', { name: 'Stay' }))
    expect(app.here()).toBe('/firmware/small/1.0.0?view=schema')
    void app.goTo('/machines')
    fireEvent.click(await screen.findByRole('button', { name: 'Leave it unsaved' }))
    await waitFor(() => expect(app.here()).toBe('/machines'))
  })

  it('is published over what was read, by a password', async () => {
    let stored = aVersion({ may: { ...aVersion().may, publish: yes } })
    const server = fakeServer({ ...frame, 'GET /me': aMe(), 'GET /firmware/small/1.0.0': () => stored, 'POST /firmware/small/1.0.0/publish': () => (stored = aVersion({ state: 'published' })) })
    openApp('/firmware/small/1.0.0')
    fireEvent.click(await screen.findByRole('button', { name: 'Publish…' }))
    press('Sign and publish')
    expect(server.acts()).toEqual([])
    fireEvent.change(screen.getByLabelText('Your password'), { target: { value: 'a long enough password' } })
    press('Sign and publish')
    await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull())
    expect(server.acts()[0].body).toEqual({ password: 'a long enough password', schemaHash: 'a'.repeat(64), imageHash: null })
  })
})

describe('a firmware line', () => {
  it('takes a draft from the schema of another version, and goes to write it', async () => {
    const server = fakeServer({ ...frame, 'POST /firmware/small/versions': aVersion({ version: '1.1.0' }), 'GET /firmware/small/1.1.0': aVersion({ version: '1.1.0' }) })
    const app = openApp('/firmware')
    const line = await screen.findByRole('region', { name: 'Small' })
    fireEvent.click(within(line).getByRole('button', { name: 'Draft a version…' }))
    fireEvent.change(screen.getByLabelText('Version'), { target: { value: '1.1.0' } })
    press('Draft it')
    await waitFor(() => expect(app.here()).toBe('/firmware/small/1.1.0?view=schema'))
    expect(server.acts()[0].body).toEqual({ version: '1.1.0', schemaText: smallSchemaText, notes: '' })
  })
})
