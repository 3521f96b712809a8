// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import type { LedgerEntryView } from '../../shared/contract/ledger.ts'
import type { MailView } from '../../shared/contract/mail.ts'
import { aMe, fakeServer } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const frame = { 'GET /me': aMe(), 'GET /machines': [{ key: 'dunlin', name: 'Dunlin', description: '', retired: false, joints: 0, buses: 0, currentVersion: null, openChanges: 0 }], 'GET /people': { people: [], may: { invite: { allowed: true } } } }
const hash = (digit: string) => digit.repeat(64)
const entry = (sequence: number, over: Partial<LedgerEntryView> = {}): LedgerEntryView => ({ sequence, at: '2026-11-30T18:02:00Z', person: 'Mirela Castanho', act: 'change drafted', machine: 'dunlin', subject: { machine: 'dunlin', change: 'dunlin-47' }, details: { title: 'Stiffer knee' }, hash: hash('a'), previousHash: hash('b'), ...over })
const page = (entries: LedgerEntryView[], next: number | null = null) => ({ entries, next, total: 3, acts: ['change drafted', 'refused'] })

describe('the ledger', () => {
  it('is asked for by the filter in the address, and page by page', async () => {
    const server = fakeServer({
      ...frame,
      'GET /ledger?act=change+drafted&machine=dunlin': page([entry(3), entry(2)], 2),
      'GET /ledger?act=change+drafted&machine=dunlin&before=2': page([entry(1, { person: 'Tobias Oyelaran' })]),
    })
    openApp('/ledger?act=change+drafted&machine=dunlin')
    const table = await screen.findByRole('table', { name: 'ledger' })
    expect(within(table).getAllByText('change dunlin-47')).toHaveLength(2)
    expect(screen.getByText('2 entries of 3 entries shown')).toBeTruthy()
    fireEvent.click(screen.getByRole('button', { name: 'Show older ones' }))
    expect(await within(table).findByText('Tobias Oyelaran')).toBeTruthy()
    expect(screen.queryByRole('button', { name: 'Show older ones' })).toBeNull()
    fireEvent.change(screen.getByLabelText('Act'), { target: { value: 'refused' } })
    await waitFor(() => expect(server.asked.some((a) => a.path === '/ledger?act=refused&machine=dunlin')).toBe(true))
  })

  it('opens an entry in full, and tells what a refusal was about', async () => {
    fakeServer({ ...frame, 'GET /ledger': page([entry(3, { act: 'refused', details: { asked: 'sign a change', why: 'You took part in it.' } })]) })
    const app = openApp('/ledger')
    const table = await screen.findByRole('table', { name: 'ledger' })
    expect(within(table).getByText('refused: sign a change')).toBeTruthy()
    fireEvent.click(within(table).getByRole('button', { name: '3' }))
    const dialog = await screen.findByRole('dialog', { name: 'Entry 3: refused' })
    expect(dialog.textContent).toContain('You took part in it.')
    expect(dialog.textContent).toContain('bbbb bbbb')
    expect(app.here()).toBe('/ledger?entry=3')
  })

  it('says where the chain breaks', async () => {
    fakeServer({ ...frame, 'GET /ledger': page([entry(3)]), 'GET /ledger/verify': { holds: false, entries: 1, sequence: 2, why: 'its content does not match its hash' } })
    openApp('/ledger')
    fireEvent.click(await screen.findByRole('button', { name: 'Verify the chain' }))
    expect(await screen.findByText(/the chain breaks at entry 2: its content does not match its hash\. 1 entry holds before it/)).toBeTruthy()
  })

  it('says that the chain holds', async () => {
    fakeServer({ ...frame, 'GET /ledger': page([entry(3)]), 'GET /ledger/verify': { holds: true, entries: 3, lastHash: hash('a') } })
    openApp('/ledger')
    fireEvent.click(await screen.findByRole('button', { name: 'Verify the chain' }))
    expect((await screen.findByText(/chain holds, 3 entries/)).textContent).toContain('aaaa aaaa')
  })
})

describe('the mail', () => {
  const mail = (over: Partial<MailView> = {}): MailView => ({
    id: 5, to: 'wren@dunlin.example', person: 'Wren Halloran', subject: 'Your invitation to Detent', text: `Wren Halloran,\n\n${window.location.origin}/links/abc\nhttps://other.example/x\n`, state: 'failed', topic: 'account', attempts: 8, createdAt: '2026-11-30T18:02:00Z', sentAt: null, lastError: 'connection refused', may: { retry: { allowed: true } }, ...over,
  })

  it('links to this program alone, and sends again what failed', async () => {
    let state = mail()
    const server = fakeServer({ ...frame, 'GET /mail': () => ({ mails: [state], next: null, total: 1 }), 'POST /mail/5/retry': () => (state = mail({ state: 'queued', attempts: 0, lastError: null })) })
    openApp('/mail')
    fireEvent.click(await screen.findByRole('button', { name: 'Your invitation to Detent' }))
    const dialog = await screen.findByRole('dialog')
    expect(within(dialog).getAllByRole('link').map((a) => a.getAttribute('href'))).toEqual([`${window.location.origin}/links/abc`])
    expect(within(dialog).getByText('connection refused')).toBeTruthy()
    fireEvent.click(within(dialog).getByRole('button', { name: 'Send it now' }))
    expect((await within(dialog).findAllByText('to be sent')).length).toBe(1)
    expect(server.acts()).toMatchObject([{ path: '/mail/5/retry' }])
  })

  it('says when there is none', async () => {
    fakeServer({ ...frame, 'GET /mail': { mails: [], next: null, total: 0 } })
    openApp('/mail')
    expect(await screen.findByText('No mail was queued yet.')).toBeTruthy()
  })
})
