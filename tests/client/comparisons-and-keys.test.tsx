// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import type { CompareChoices, ComparisonView } from '../../shared/contract/comparisons.ts'
import type { WorkplaceKeysView } from '../../shared/contract/keys.ts'
import { machineOfRef, readSideRef, writeSideRef } from '../../src/features/comparisons/side-ref.ts'
import { aMe, anEngineer, fakeServer, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const yes = { allowed: true } as const
const machines = [{ key: 'dunlin', name: 'Dunlin', description: '', retired: false, joints: 2, buses: 1, currentVersion: '1.7.0', openChanges: 1 }]

describe('a side of a comparison', () => {
  it.each([
    ['release:dunlin@1.7.0', { kind: 'release', whole: 'release:dunlin@1.7.0', joint: '' }, 'dunlin'],
    ['release:dunlin@1.7.0:r3-knee', { kind: 'release', whole: 'release:dunlin@1.7.0', joint: 'r3-knee' }, 'dunlin'],
    ['change:mud-walker-47:r3-knee', { kind: 'change', whole: 'change:mud-walker-47', joint: 'r3-knee' }, 'mud-walker'],
    ['revision:dunlin/r3-knee@r12', { kind: 'revision', whole: 'revision:dunlin/r3-knee@r12', joint: '' }, 'dunlin'],
    ['read-back:41', { kind: 'read-back', whole: 'read-back:41', joint: '' }, null],
    ['', { kind: '', whole: '', joint: '' }, null],
  ])('%s is taken apart and put together', (ref, parts, machine) => {
    expect(readSideRef(ref)).toEqual(parts)
    expect(writeSideRef(parts.whole, parts.joint)).toBe(ref)
    expect(machineOfRef(ref)).toBe(machine)
  })
})

const side = (ref: string, label: string): ComparisonView['a'] => ({ ref, kind: 'release', label, note: 'current, sequence number 9', machine: 'dunlin', machineName: 'Dunlin', joints: 2, release: { machine: 'dunlin', version: '1.7.0' }, change: null })
const group = { only: null, settings: [], driveTrain: [], values: [], registers: [], own: [], problems: [] }
const view: ComparisonView = {
  a: side('release:dunlin@1.6.3', 'Dunlin 1.6.3'),
  b: side('release:dunlin@1.7.0', 'Dunlin 1.7.0'),
  groups: [
    {
      ...group,
      joints: [{ key: 'l1-knee', name: 'L1 knee', keyB: 'l1-knee' }, { key: 'r1-knee', name: 'R1 knee', keyB: 'r1-knee' }],
      values: [{ parameter: 'currentLimit', title: 'Current limit', nameA: null, unitA: 'A', unitB: 'A', a: { value: 2.6, origin: 'family' }, b: { value: 2.8, origin: 'joint' }, changePercent: 7.69 }],
      registers: [{ address: 0x38, bytes: 2, what: 'Current limit', encodingA: 'u16', encodingB: 'u16', a: '28 0A', b: 'F0 0A' }],
      own: ['L1 knee', 'R1 knee'].map((joint) => ({ joint, address: 0x0c, bytes: 4, what: 'release number', encodingA: 'u32', encodingB: 'u32', a: '08 00 00 00', b: '09 00 00 00' })),
    },
    { ...group, joints: [{ key: 'winch', name: 'winch', keyB: 'winch' }], only: 'b' },
    { ...group, joints: [{ key: 'l1-yaw', name: 'L1 yaw', keyB: 'l1-yaw' }], own: [{ joint: 'L1 yaw', address: 0x0c, bytes: 4, what: 'release number', encodingA: 'u32', encodingB: 'u32', a: '08 00 00 00', b: '09 00 00 00' }] },
  ],
  same: [],
  textA: '{\n  "a": 1\n}\n',
  textB: '{\n  "a": 2\n}\n',
}
const choices: CompareChoices = {
  kinds: [
    { kind: 'release', label: 'releases', narrows: true, choices: [{ ref: 'release:dunlin@1.7.0', label: '1.7.0', note: 'current: Knee current limit' }, { ref: 'release:dunlin@1.6.3', label: '1.6.3', note: 'superseded: Hip reach' }] },
    { kind: 'change', label: 'changes', narrows: true, choices: [{ ref: 'change:dunlin-47', label: 'dunlin-47', note: 'draft: Stiffer knee' }] },
    { kind: 'read-back', label: 'read-backs', narrows: false, choices: [] },
  ],
  joints: [{ key: 'l1-knee', name: 'L1 knee' }, { key: 'r1-knee', name: 'R1 knee' }],
}
const frame = { 'GET /me': anEngineer, 'GET /machines': machines, 'GET /machines/dunlin/compare-choices': choices }
const at = '/compare?a=release%3Adunlin%401.6.3&b=release%3Adunlin%401.7.0'

describe('comparing', () => {
  it('begins with two empty sides and says what to do', async () => {
    fakeServer(frame)
    openApp('/compare')
    expect(await screen.findByText('Choose two things to compare.')).toBeTruthy()
  })

  it('puts what is chosen into the address', async () => {
    fakeServer({ ...frame, 'GET /compare': view })
    const app = openApp('/compare')
    const a = within(await screen.findByRole('group', { name: 'A' }))
    const b = within(screen.getByRole('group', { name: 'B' }))
    await waitFor(() => expect(a.getByRole('option', { name: '1.7.0: current: Knee current limit' })).toBeTruthy())
    fireEvent.change(a.getByLabelText('Which'), { target: { value: 'release:dunlin@1.6.3' } })
    fireEvent.change(b.getByLabelText('What'), { target: { value: 'change' } })
    fireEvent.change(b.getByLabelText('Which'), { target: { value: 'change:dunlin-47' } })
    await waitFor(() => expect(new URLSearchParams(app.here().split('?')[1]).get('b')).toBe('change:dunlin-47'))
    fireEvent.change(a.getByLabelText('Joint'), { target: { value: 'r1-knee' } })
    await waitFor(() => expect(new URLSearchParams(app.here().split('?')[1]).get('a')).toBe('release:dunlin@1.6.3:r1-knee'))
    expect(b.getByRole<HTMLOptionElement>('option', { name: 'a read-back' }).disabled).toBe(true)
  })

  it('shows by value what differs, joints that differ alike together, and names the others', async () => {
    fakeServer({ ...frame, 'GET /compare': view })
    openApp(at)
    const table = within(await screen.findByRole('table', { name: 'values that differ of L1 knee, R1 knee' }))
    const row = table.getAllByRole('row')[1]
    expect(row.textContent).toMatch(/Current limit.*2\.6.*family.*2\.8.*joint.*\+7\.7/)
    expect(screen.getByText('Stands in Dunlin 1.7.0 alone.')).toBeTruthy()
    expect(screen.getByText('The same values; the images differ in registers alone: L1 yaw.')).toBeTruthy()
    expect(screen.getByRole('link', { name: 'Dunlin 1.7.0' }).getAttribute('href')).toBe('/machines/dunlin/releases/1.7.0')
  })

  it('shows by register the bytes of both, and a word that all have alike once', async () => {
    fakeServer({ ...frame, 'GET /compare': view })
    openApp(at)
    fireEvent.click(await screen.findByRole('link', { name: 'by register' }))
    const table = within(await screen.findByRole('table', { name: 'registers that differ of L1 knee, R1 knee' }))
    const rows = table.getAllByRole('row').slice(1).map((r) => r.textContent)
    expect(rows).toHaveLength(2)
    expect(rows[0]).toMatch(/0x38Current limitu1628 0A.*F0 0A.*1 of 2 bytes changed/)
    expect(rows[1]).toContain('release number of each')
  })

  it('shows the two as text', async () => {
    fakeServer({ ...frame, 'GET /compare': view })
    openApp(`${at}&by=text`)
    expect(await screen.findByText('added:', { exact: false })).toBeTruthy()
  })

  it('says so when the two are the same', async () => {
    fakeServer({ ...frame, 'GET /compare': { ...view, groups: [], same: [{ key: 'l1-knee', name: 'L1 knee' }] } })
    openApp(at)
    expect(await screen.findByText('The two are the same, value by value and byte by byte.')).toBeTruthy()
  })

  it('says in the server’s words what names nothing', async () => {
    fakeServer({ ...frame, 'GET /compare': problem(404, 'not-found', 'There is no release:dunlin@9.9.9 that you may read. Nothing was compared.') })
    openApp('/compare?a=release%3Adunlin%409.9.9&b=release%3Adunlin%401.7.0')
    expect(await screen.findByText(/There is no release:dunlin@9\.9\.9/)).toBeTruthy()
  })
})

const keys: WorkplaceKeysView = {
  keys: [
    { keyId: 'ab12cd34'.padEnd(64, '0'), publicKey: '-----BEGIN PUBLIC KEY-----\nMCow\n-----END PUBLIC KEY-----\n', from: '2026-10-01T09:00:00Z', until: null, madeBy: 'Silvan Okoro', releases: 3 },
    { keyId: 'ef56'.padEnd(64, '1'), publicKey: 'old', from: '2026-07-01T09:00:00Z', until: '2026-10-01T09:00:00Z', madeBy: null, releases: 5 },
  ],
  may: { rotate: yes },
}

describe('the keys', () => {
  it('show every public key with its time, to be downloaded, and how a kit is proven', async () => {
    fakeServer({ ...frame, 'GET /keys': { ...keys, may: { rotate: { allowed: false, why: 'This takes the role administrator.' } } } })
    openApp('/keys')
    const link = await screen.findByRole('link', { name: /public key, \.pem\s*, of ab12cd34/ })
    expect(decodeURIComponent(link.getAttribute('href')!)).toContain('BEGIN PUBLIC KEY')
    expect(screen.getByText(/rotated to by Silvan Okoro, 3 releases/)).toBeTruthy()
    expect(screen.getByText(/made by Detent, 5 releases/)).toBeTruthy()
    expect(screen.getByText('sha256sum --check --strict SHA256SUMS')).toBeTruthy()
    expect(screen.getByRole('button', { name: 'Rotate…' }).getAttribute('aria-disabled')).toBe('true')
  })

  it('are rotated by name and password alone', async () => {
    const after = { ...keys, keys: [{ ...keys.keys[0], keyId: '99'.padEnd(64, '9'), from: '2026-11-01T09:00:00Z' }, ...keys.keys] }
    const server = fakeServer({ ...frame, 'GET /me': aMe(), 'GET /keys': keys, 'POST /keys/rotate': after })
    openApp('/keys')
    fireEvent.click(await screen.findByRole('button', { name: 'Rotate…' }))
    const dialog = within(screen.getByRole('dialog'))
    const rotate = () => fireEvent.click(dialog.getByRole('button', { name: 'Rotate' }))
    rotate()
    fireEvent.change(dialog.getByLabelText('Your password'), { target: { value: 'a password' } })
    fireEvent.change(dialog.getByLabelText('Write how the key in use begins'), { target: { value: 'ab12cd3' } })
    rotate()
    expect(server.acts()).toEqual([])
    fireEvent.change(dialog.getByLabelText('Write how the key in use begins'), { target: { value: 'ab12cd34' } })
    rotate()
    await waitFor(() => expect(server.acts()).toMatchObject([{ method: 'POST', path: '/keys/rotate', body: { password: 'a password', keyId: keys.keys[0].keyId } }]))
    expect(await screen.findByRole('link', { name: /public key, \.pem\s*, of 99999999/ })).toBeTruthy()
  })

  it('keep what was typed when the server refuses', async () => {
    fakeServer({ ...frame, 'GET /me': aMe(), 'GET /keys': keys, 'POST /keys/rotate': problem(403, 'wrong-password', 'The password is wrong. The key in use stays.', { errors: [{ pointer: '/password', detail: 'is wrong' }] }) })
    openApp('/keys')
    fireEvent.click(await screen.findByRole('button', { name: 'Rotate…' }))
    const dialog = within(screen.getByRole('dialog'))
    fireEvent.change(dialog.getByLabelText('Your password'), { target: { value: 'mistyped' } })
    fireEvent.change(dialog.getByLabelText('Write how the key in use begins'), { target: { value: 'ab12cd34' } })
    fireEvent.click(dialog.getByRole('button', { name: 'Rotate' }))
    expect(await dialog.findByText('is wrong')).toBeTruthy()
    expect(dialog.getByText('The password is wrong. The key in use stays.')).toBeTruthy()
    expect(dialog.getByLabelText<HTMLInputElement>('Your password').value).toBe('mistyped')
  })
})
