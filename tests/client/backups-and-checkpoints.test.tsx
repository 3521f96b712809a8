// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import type { BackupsPage, BackupView } from '../../shared/contract/backups.ts'
import type { CheckpointPage } from '../../shared/contract/ledger.ts'
import { aMe, fakeServer, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const keeper = aMe({ acts: { '*': ['read', 'keep people', 'keep mail', 'keep backups'] } })
const frame = { 'GET /me': keeper, 'GET /machines': [], 'GET /people': { people: [], may: { invite: { allowed: true } } } }
/** A chosen file; jsdom's own has no text(), which every browser has. */
const aFile = (text: string) => Object.assign(new File([text], 'kept.jsonl'), { text: async () => text })
const hash = (digit: string) => digit.repeat(64)
const backup = (over: Partial<BackupView> = {}): BackupView => ({ name: '2026-11-30T02-00-00Z', madeAt: '2026-11-30T02:00:00Z', occasion: 'daily', bytes: 1_200_000, sha256: hash('a'), files: 2, fileBytes: 300_000, ledger: { entries: 120, lastHash: hash('b') }, trouble: [], orphans: 0, privateKey: false, ...over })
const backups = (over: Partial<BackupsPage> = {}): BackupsPage => ({ backups: [backup()], unreadable: 0, folder: '/srv/detent/backups', kept: 14, hour: 2, failed: null, may: { make: { allowed: true } }, ...over })

describe('the backups', () => {
  it('are listed with what they hold, and one is made when asked', async () => {
    const server = fakeServer({ ...frame, 'GET /backups': backups(), 'POST /backups': backups({ backups: [backup({ name: '2026-11-30T09-00-00Z', occasion: 'asked', ledger: { entries: 131, lastHash: hash('c') } }), backup()] }) })
    openApp('/backups')
    const table = await screen.findByRole('table', { name: 'backups' })
    expect(within(table).getByText('2026-11-30T02-00-00Z')).toBeTruthy()
    expect(within(table).getByText('120')).toBeTruthy()
    expect(within(table).getByText('not in it')).toBeTruthy()
    expect(screen.getByText(/one a day at 02:00 of the server’s clock; the newest 14 are kept/)).toBeTruthy()
    fireEvent.click(screen.getByRole('button', { name: 'Make one now' }))
    expect(await within(table).findByText('131')).toBeTruthy()
    expect(server.acts()).toMatchObject([{ method: 'POST', path: '/backups', headers: { 'Idempotency-Key': expect.stringMatching(/.{8}/) } }])
  })

  it('say what is wrong: a failed one, a file that is lacking, a private key, what can’t be read', async () => {
    fakeServer({ ...frame, 'GET /backups': backups({ failed: { at: '2026-12-01T02:00:00Z', why: 'no space left' }, unreadable: 1, backups: [backup({ orphans: 3, privateKey: true, trouble: [{ sha256: hash('d'), what: 'altered' }] })] }) })
    openApp('/backups')
    expect((await screen.findByRole('alert')).textContent).toMatch(/The last backup failed.*no space left/)
    const table = screen.getByRole('table', { name: 'backups' })
    expect(table.textContent).toContain('lacks 1 stored file: dddddddd altered')
    expect(within(table).getByText('in it')).toBeTruthy()
    expect(screen.getByText(/1 folder there can’t be read as a backup; 3 stored files in the newest one are named by nothing/)).toBeTruthy()
  })

  it('tell when making one was refused, and keep the list', async () => {
    fakeServer({ ...frame, 'GET /backups': backups({ backups: [], hour: null }), 'POST /backups': problem(507, 'storage-full', 'The disk that holds the database is full.') })
    openApp('/backups')
    expect(await screen.findByText('No backup was made yet.')).toBeTruthy()
    expect(screen.getByText(/none by itself/)).toBeTruthy()
    fireEvent.click(screen.getByRole('button', { name: 'Make one now' }))
    expect((await screen.findByRole('alert')).textContent).toContain('The disk that holds the database is full.')
    expect(screen.getByText('No backup was made yet.')).toBeTruthy()
  })
})

describe('the checkpoints', () => {
  const page = (total: number, allowed = true): CheckpointPage => ({
    checkpoints: Array.from({ length: total }, (_, i) => ({ sequence: 100 - i, hash: hash('e'), at: '2026-11-30T02:00:00Z', occasion: i === 0 ? ('release' as const) : ('daily' as const), keyId: hash('f') })),
    total,
    may: { sign: allowed ? { allowed } : { allowed: false, why: 'This takes the role administrator.' } },
  })
  const ledger = { 'GET /ledger': { entries: [], next: null, total: 0, acts: [] } }

  it('open on the ledger’s page, are taken away as a file, and one is signed when asked', async () => {
    const server = fakeServer({ ...frame, ...ledger, 'GET /ledger/checkpoints': page(1), 'POST /ledger/checkpoints': page(2) })
    const app = openApp('/ledger')
    expect((await screen.findByRole('link', { name: 'Export as a table' })).getAttribute('href')).toBe('/api/ledger/export.csv')
    fireEvent.click(screen.getByRole('button', { name: 'Checkpoints…' }))
    const dialog = await screen.findByRole('dialog', { name: 'Checkpoints' })
    expect(app.here()).toBe('/ledger?checkpoints=shown')
    expect(within(dialog).getByRole('link', { name: 'Take all checkpoints away' }).getAttribute('href')).toBe('/api/ledger/checkpoints.jsonl')
    expect(await within(dialog).findByText('with a release')).toBeTruthy()
    fireEvent.click(within(dialog).getByRole('button', { name: 'Sign one now' }))
    expect(await within(dialog).findByText('once a day')).toBeTruthy()
    expect(server.acts()).toHaveLength(1)
  })

  it('kept elsewhere are held against it: what does not fit is named', async () => {
    const why = 'the ledger ends at entry 6, and on 2026-03-03 it reached entry 8: it was cut short'
    const server = fakeServer({ ...frame, ...ledger, 'GET /ledger/checkpoints': page(0, false), 'POST /ledger/checkpoints/verify': { holds: false, checkpoints: 3, line: 2, why, goodUpTo: 4 } })
    openApp('/ledger?checkpoints=shown')
    const dialog = await screen.findByRole('dialog', { name: 'Checkpoints' })
    const choose = within(dialog).getByLabelText('Hold a kept file against the ledger…')
    fireEvent.change(choose, { target: { files: [aFile('{"line":1}\n')] } })
    expect(await within(dialog).findByText(new RegExp(`line 2 does not hold: ${why}\\. Entries up to 4 are as they were signed`))).toBeTruthy()
    expect(server.acts()).toMatchObject([{ body: { checkpoints: '{"line":1}\n' } }])
    server.replies['POST /ledger/checkpoints/verify'] = { holds: true, checkpoints: 3, newest: '2026-11-30T02:00:00Z', upTo: 120 }
    fireEvent.change(choose, { target: { files: [aFile('x')] } })
    await waitFor(() => expect(dialog.textContent).toContain('3 checkpoints hold: entries up to 120 stand as signed'))
    expect(within(dialog).getByText(/No checkpoint was signed yet/)).toBeTruthy()
  })
})
