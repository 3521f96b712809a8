// @vitest-environment jsdom
import './setup-dom.ts'
import { act, render as renderPlain, fireEvent, screen, waitFor, within } from '@testing-library/react'
import { useState, type ReactElement } from 'react'
import { describe, expect, it, vi } from 'vitest'
import { MemoryRouter } from 'react-router'
import { compareSchemas } from '../../shared/registers/compare-schemas.ts'
import type { CarryOverPreview, FirmwareComparisonView, FirmwareLineView, FirmwareVersionView } from '../../shared/contract/firmware.ts'
import { Providers } from '../../src/app/providers.tsx'
import { AddressMap } from '../../src/features/firmware/components/address-map.tsx'
import { CarryOverDialog } from '../../src/features/firmware/components/carry-over-dialog.tsx'
import { FirmwareImage } from '../../src/features/firmware/components/firmware-image.tsx'
import { addressRows } from '../../src/features/firmware/address-rows.ts'
import { nextStop, stopsOf } from '../../src/features/firmware/map-walk.ts'
import { BenchImageDialog } from '../../src/features/releases/components/bench-image-dialog.tsx'
import { queryClient } from '../../src/lib/query-client.ts'
import { firmware, firmwareText } from '../registers/a-schema.ts'
import { twoKnees } from '../support/a-walker-set.ts'
import { anEngineer, fakeServer, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const yes = { allowed: true } as const
const no = (why: string) => ({ allowed: false, why }) as const
const schema = firmware('hinge-2.1.0')
const show = (element: ReactElement) => {
  queryClient.setQueryData(['me'], anEngineer)
  return renderPlain(<Providers client={queryClient}><MemoryRouter>{element}</MemoryRouter></Providers>)
}

describe('walking the register map', () => {
  const rows = addressRows(schema)
  const stops = stopsOf(rows)

  it('stops at every word and every gap once, in order of address', () => {
    expect(stops.map((s) => s.address)).toEqual([...new Set(stops.map((s) => s.address))].sort((a, b) => a - b))
    for (const word of schema.words) expect(stops.filter((s) => s.address === word.address)).toHaveLength(1)
  })

  it.each<[number, string, number, number | null]>([
    [0x10, 'ArrowRight', 0, 0x14],
    [0x14, 'ArrowLeft', 0, 0x10],
    [0x14, 'ArrowDown', 4, 0x24],
    [0x10, 'ArrowDown', 0, 0x20],
    [0x24, 'ArrowUp', 4, 0x14],
    [0x48, 'ArrowDown', 8, 0x50],
    [0x00, 'ArrowUp', 0, null],
    [0x00, 'ArrowLeft', 0, null],
    [0x30, 'Home', 0, 0x00],
    [0x30, 'End', 0, 0x7e],
    [0x30, 'Enter', 0, null],
  ])('from %i, %s leads on', (from, key, column, to) => {
    expect(nextStop(stops, from, key, column)).toBe(to)
  })

  function Map() {
    const [chosen, setChosen] = useState('')
    return <AddressMap schema={schema} chosen={chosen} onChoose={setChosen} />
  }

  it('has one stop in the tab order; arrows move the focus, and the line below says what lies there', () => {
    renderPlain(<Map />)
    const map = screen.getByRole('group', { name: /register map/ })
    const inOrder = () => [...map.querySelectorAll('[tabindex="0"]')]
    expect(inOrder()).toHaveLength(1)
    const gain = screen.getByRole('button', { name: '0x24 to 0x27: Velocity gain, q7.24, read and written' })
    act(() => gain.focus())
    expect(inOrder()).toEqual([gain])
    expect(screen.getByText(/low byte first, read and written, in A·s\/rad/)).toBeTruthy()
    fireEvent.keyDown(gain, { key: 'ArrowLeft' })
    expect(document.activeElement?.getAttribute('aria-label')).toBe('0x20 to 0x23: no register, 4 bytes')
    fireEvent.keyDown(document.activeElement!, { key: 'ArrowRight' })
    expect(document.activeElement).toBe(gain)
  })

  it('picks the row of a word that is pressed, and says what lies under the pointer', () => {
    renderPlain(<Map />)
    const limit = screen.getByRole('button', { name: /^0x38 to 0x39: Current limit/ })
    fireEvent.click(limit)
    expect(limit.getAttribute('aria-pressed')).toBe('true')
    fireEvent.pointerEnter(screen.getByRole('img', { name: /^0x50 to 0x5F: no register, 16 bytes/ }))
    expect(screen.getByText(/no register, 16 bytes of fill/)).toBeTruthy()
  })
})

/** Stands in for the browser's request, which jsdom would send to a server. */
function fakeRequest(answer: (form: FormData, headers: Record<string, string>) => { status: number; body: unknown } | 'network' | 'waits') {
  const sent: { method: string; url: string; headers: Record<string, string>; file: File }[] = []
  class Fake {
    upload: { onprogress?: (e: object) => void } = {}
    onload?: () => void
    onerror?: () => void
    onabort?: () => void
    status = 0
    responseText = ''
    private headers: Record<string, string> = {}
    private to = { method: '', url: '' }
    open(method: string, url: string) { this.to = { method, url } }
    setRequestHeader(name: string, value: string) { this.headers[name] = value }
    abort() { this.onabort?.() }
    send(form: FormData) {
      const file = form.get('image') as File
      sent.push({ ...this.to, headers: this.headers, file })
      queueMicrotask(() => {
        this.upload.onprogress?.({ loaded: Math.floor(file.size / 2), total: file.size, lengthComputable: true })
        const reply = answer(form, this.headers)
        if (reply === 'waits') return
        if (reply === 'network') return this.onerror?.()
        this.status = reply.status
        this.responseText = JSON.stringify(reply.body)
        this.onload?.()
      })
    }
  }
  vi.stubGlobal('XMLHttpRequest', Fake)
  return sent
}

const aVersion = (over: Partial<FirmwareVersionView> = {}): FirmwareVersionView => ({
  line: 'hinge', version: '2.2.0', state: 'draft', schemaHash: 'a'.repeat(64), uploadedBy: 'Mirela Castanho', publishedBy: null, publishedAt: null, parameters: 46, imageBytes: 128, firmwareImage: null,
  lineName: 'Hinge', schemaText: firmwareText('hinge-2.1.0'), notes: '', revision: 4, writers: ['Mirela Castanho'], createdAt: '2026-11-30T09:00:00Z', retiredBy: null, retiredAt: null,
  parameterList: [], image: { base: 0, length: 128, addressWidth: 8 }, advice: [], may: { edit: yes, publish: no('You wrote in it.'), retire: no('It is draft.'), downloadImage: no('No firmware image was attached.') }, ...over,
})
const attached = { sha256: 'b'.repeat(64), bytes: 5000, format: 'bin', name: 'hinge-2.2.0.bin' } as const

describe('the firmware image of a version', () => {
  const choose = (file: File) => fireEvent.change(screen.getByLabelText('firmware image file'), { target: { files: [file] } })

  it('is sent as it is, over the revision that was read, and tells how much has gone', async () => {
    const sent = fakeRequest(() => ({ status: 200, body: aVersion({ firmwareImage: attached, revision: 5 }) }))
    show(<FirmwareImage version={aVersion()} hold={null} />)
    choose(new File([new Uint8Array(5000)], 'hinge-2.2.0.bin'))
    await waitFor(() => expect(sent).toMatchObject([{ method: 'PUT', url: '/api/firmware/hinge/2.2.0/image', headers: { 'If-Match': '"4"', 'X-Detent-Token': anEngineer.token } }]))
    expect(sent[0].file).toMatchObject({ name: 'hinge-2.2.0.bin', size: 5000 })
    expect(sent[0].headers['Idempotency-Key']).toMatch(/^[\w-]{36}$/)
  })

  it('shows its progress and can be stopped; nothing is kept then', async () => {
    fakeRequest(() => 'waits')
    show(<FirmwareImage version={aVersion()} hold={null} />)
    choose(new File([new Uint8Array(4000)], 'hinge.bin'))
    await waitFor(() => expect(screen.getByRole('progressbar').getAttribute('aria-valuenow')).toBe('2000'))
    fireEvent.click(screen.getByRole('button', { name: 'stop Sending hinge.bin' }))
    expect(await screen.findByText('Stopped; nothing was kept.')).toBeTruthy()
    expect(screen.getByRole('button', { name: 'Attach a firmware image…' })).toBeTruthy()
  })

  it('is not sent when it is too large', () => {
    const sent = fakeRequest(() => 'network')
    show(<FirmwareImage version={aVersion()} hold={null} />)
    const file = new File(['x'], 'large.bin')
    Object.defineProperty(file, 'size', { value: 8 * 1024 * 1024 + 1 })
    choose(file)
    expect(screen.getByRole('alert').textContent).toMatch(/too large.*at most 8\.39 MB/)
    expect(sent).toEqual([])
  })

  it('says in the server’s words what is wrong with it, and when no answer came', async () => {
    fakeRequest((form) => ((form.get('image') as File).name === 'lost.hex' ? 'network' : { status: 415, body: { type: '/problems/wrong-media-type', title: 'The body has another type than expected', detail: 'Line 7 ends with the checksum F3; its bytes give F2. Nothing was attached.', errors: [] } }))
    show(<FirmwareImage version={aVersion()} hold={null} />)
    choose(new File(['x'], 'hinge.hex'))
    expect(await screen.findByText(/Line 7 ends with the checksum F3/)).toBeTruthy()
    choose(new File(['x'], 'lost.hex'))
    expect(await screen.findByText(/Detent did not answer/)).toBeTruthy()
  })

  it('waits while the draft has unsaved text', () => {
    const sent = fakeRequest(() => 'network')
    show(<FirmwareImage version={aVersion()} hold="Save the draft first." />)
    expect(screen.getByRole('button', { name: 'Attach a firmware image…' }).getAttribute('aria-disabled')).toBe('true')
    choose(new File(['x'], 'hinge.bin'))
    expect(sent).toEqual([])
  })

  it('of a published version is shown with its hash and downloaded, not replaced', () => {
    show(<FirmwareImage version={aVersion({ state: 'published', firmwareImage: attached, may: { edit: no('It is published.'), publish: no(''), retire: yes, downloadImage: yes } })} hold={null} />)
    expect(screen.getByText('hinge-2.2.0.bin')).toBeTruthy()
    expect(screen.getByTitle('b'.repeat(64))).toBeTruthy()
    expect(screen.getByRole('button', { name: 'Download' })).toBeTruthy()
    expect(screen.queryByRole('button', { name: /Attach/ })).toBeNull()
  })
})

describe('two versions of a line', () => {
  const comparison: FirmwareComparisonView = {
    ...compareSchemas(firmware('hinge-2.0.0'), schema),
    line: 'hinge', lineName: 'Hinge', before: { version: '2.0.0', state: 'published', schemaHash: 'a' }, after: { version: '2.1.0', state: 'published', schemaHash: 'b' },
    titles: Object.fromEntries(schema.parameters.map((p) => [p.name, { title: p.title, unit: p.unit ?? '' }])), carry: schema.carry, schemaTextBefore: '{}', schemaTextAfter: '{ }',
  }
  const version = (v: string): FirmwareLineView['versions'][number] => ({ line: 'hinge', version: v, state: 'published', schemaHash: '', uploadedBy: '', publishedBy: null, publishedAt: null, parameters: 1, imageBytes: 128, firmwareImage: null })
  const lines: FirmwareLineView[] = [{ key: 'hinge', name: 'Hinge', description: '', versions: [version('2.1.0'), version('2.0.0')], may: { draftVersion: yes, describe: yes } }]

  it('are shown by what was added, moved, rescaled and renamed, and how a set is carried over', async () => {
    fakeServer({ 'GET /me': anEngineer, 'GET /machines': [], 'GET /firmware': lines, 'GET /firmware/hinge/2.1.0/since/2.0.0': comparison })
    openApp('/firmware/hinge/compare')
    const changed = within(await screen.findByRole('table', { name: 'parameters changed' }))
    expect(changed.getByText('was watchdog')).toBeTruthy()
    const speed = changed.getAllByRole('row').find((r) => r.textContent?.includes('speedLimit'))!
    expect(speed.textContent).toMatch(/in another unit.*rpm.*rad\/s/)
    expect(within(screen.getByRole('table', { name: 'parameters added' })).getByText('Soft start')).toBeTruthy()
    expect(screen.getByText('speedLimit is converted from rpm to rad/s')).toBeTruthy()
    expect(screen.getByRole('link', { name: 'Swap' }).getAttribute('href')).toBe('/firmware/hinge/compare?from=2.1.0&to=2.0.0')
  })
})

describe('carrying over', () => {
  const set = twoKnees('hinge 2.0.0')
  const change = { key: 'dunlin-47', revision: 3, set }
  const line: FirmwareLineView = {
    key: 'hinge', name: 'Hinge', description: '', may: { draftVersion: yes, describe: yes },
    versions: (['2.2.0', '2.1.0', '2.0.0', '1.9.0'] as const).map((version) => ({ line: 'hinge', version, state: version === '1.9.0' ? 'retired' : version === '2.2.0' ? 'draft' : 'published', schemaHash: '', uploadedBy: '', publishedBy: null, publishedAt: null, parameters: 1, imageBytes: 128, firmwareImage: null })),
  }
  const preview: CarryOverPreview = {
    to: 'hinge 2.1.0', joints: [{ joint: 'l1-knee', name: 'L1 knee', from: 'hinge 2.0.0' }, { joint: 'r1-knee', name: 'R1 knee', from: 'hinge 2.0.0' }],
    rows: [
      { place: 'family', key: 'knee', kind: 'renamed', from: 'watchdog', fromUnit: 'ms', to: 'busWatchdog', toUnit: 'ms', before: 300, after: 300, rounded: false },
      { place: 'family', key: 'knee', kind: 'converted', from: 'speedLimit', fromUnit: 'rpm', to: 'speedLimit', toUnit: 'rad/s', before: 60, after: 2 * Math.PI, rounded: true },
      { place: 'family', key: 'knee', kind: 'kept', from: 'velocityGain', fromUnit: 'A·s/rad', to: 'velocityGain', toUnit: 'A·s/rad', before: 3.2, after: 3.2, rounded: false },
    ],
    defaults: [{ parameter: 'encoderResolution', title: 'Encoder resolution', unit: 'counts', before: 16384, after: 65536, joints: ['l1-knee', 'r1-knee'] }],
    problems: [{ pointer: '/families/knee/values/odd', detail: 'odd has no place in the new version.' }], edits: [], seen: 'c'.repeat(64),
  }
  const replies = { 'GET /firmware': [line], 'GET /changes/dunlin-47/carry-over': preview }

  it('shows what it alters before it can be accepted, and sends what was read', async () => {
    const server = fakeServer({ ...replies, 'POST /changes/dunlin-47/carry-over': { key: 'dunlin-47' } })
    const carried = vi.fn()
    show(<CarryOverDialog change={change} start="family:knee" onClose={() => {}} onCarried={carried} />)
    const accept = () => screen.getByRole('button', { name: 'Accept into the draft' })
    fireEvent.click(accept())
    const to = await screen.findByLabelText<HTMLSelectElement>('To')
    await waitFor(() => expect([...to.options].map((o) => o.textContent)).toEqual(['choose a version', 'hinge 2.2.0, draft', 'hinge 2.1.0']))
    fireEvent.change(to, { target: { value: 'hinge 2.1.0' } })
    const table = within(await screen.findByRole('table', { name: 'values that alter' }))
    expect(table.getAllByRole('row').slice(1).map((r) => r.textContent)).toEqual([expect.stringMatching(/watchdog 300ms.*busWatchdog 300ms.*renamed/), expect.stringMatching(/speedLimit 60rpm.*rad\/s.*converted, to the nearest double/)])
    expect(screen.getByText('1 value needs you; it stays as it is.')).toBeTruthy()
    expect(screen.getByText('1 value stays as it is.')).toBeTruthy()
    expect(screen.getByText(/Encoder resolution/).textContent).toMatch(/16.384.*65.536/)
    expect(server.acts()).toEqual([])
    fireEvent.click(accept())
    await waitFor(() => expect(server.acts()).toMatchObject([{ path: '/changes/dunlin-47/carry-over', body: { to: 'hinge 2.1.0', family: 'knee', seen: preview.seen } }]))
    await waitFor(() => expect(carried).toHaveBeenCalled())
  })

  it('says when the draft moved meanwhile', async () => {
    fakeServer({ ...replies, 'POST /changes/dunlin-47/carry-over': problem(409, 'content-differs', 'The draft moved since you read what is carried over. Nothing was altered; read it again.') })
    show(<CarryOverDialog change={change} start="joint:l1-knee" onClose={() => {}} onCarried={() => {}} />)
    const to = await screen.findByLabelText<HTMLSelectElement>('To')
    await waitFor(() => expect(to.options.length).toBeGreaterThan(1))
    fireEvent.change(to, { target: { value: 'hinge 2.1.0' } })
    await screen.findByRole('table', { name: 'values that alter' })
    fireEvent.click(screen.getByRole('button', { name: 'Accept into the draft' }))
    expect(await screen.findByText(/The draft moved since you read/)).toBeTruthy()
  })
})

describe('a bench image', () => {
  const change = { key: 'dunlin-47', set: twoKnees('hinge 2.1.0') }

  it('is marked on the screen, wants a board, and offers the one the draft names', async () => {
    const server = fakeServer({ 'GET /changes/dunlin-47/bench-image': problem(422, 'check-blocks', 'The check blocks change dunlin-47: two boards answer at 0x33.') })
    show(<BenchImageDialog change={change} joint="l1-knee" onClose={() => {}} />)
    expect(screen.getByText('UNRELEASED – bench only')).toBeTruthy()
    const board = screen.getByLabelText<HTMLInputElement>('Board, serial number')
    expect(board.value).toBe(change.set.joints['l1-knee'].board)
    const take = () => fireEvent.click(screen.getByRole('button', { name: 'Take the image' }))
    fireEvent.change(board, { target: { value: ' ' } })
    take()
    expect(server.asked).toEqual([])
    fireEvent.change(board, { target: { value: 'H-0301' } })
    fireEvent.change(screen.getByLabelText('File'), { target: { value: 'hex' } })
    take()
    await waitFor(() => expect(server.asked.map((a) => a.path)).toEqual(['/changes/dunlin-47/bench-image?joint=l1-knee&board=H-0301&format=hex']))
    expect(await screen.findByText(/two boards answer at 0x33/)).toBeTruthy()
  })
})
