// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import { newPasswordProblem } from '../../src/features/people/password-rules.ts'
import { aMe, fakeServer, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const secret = 'a-secret-of-more-than-twenty-letters'
const invitation = { kind: 'invitation', name: 'Wren Halloran', email: 'wren@dunlin.example', expiresAt: '2026-12-04T09:00:00Z' }
const type = (label: string, text: string) => fireEvent.change(screen.getByLabelText(label), { target: { value: text } })
const press = (name: string) => fireEvent.click(screen.getByRole('button', { name }))

describe('a new password', () => {
  it('is counted in characters, not code units', () => {
    expect(newPasswordProblem('😀'.repeat(14), '😀'.repeat(14))).toMatchObject({ field: 'next', words: expect.stringContaining('14 characters') })
    expect(newPasswordProblem('😀'.repeat(15), '😀'.repeat(15))).toBeNull()
  })
})

describe('a mailed link', () => {
  it('sets a password that was typed twice, and tells a signer what comes next', async () => {
    const server = fakeServer({ [`GET /links/${secret}`]: invitation, 'POST /links/use': { email: 'wren@dunlin.example', signingHold: 'password reset' } })
    openApp(`/links/${secret}`)
    expect(await screen.findByText(/Welcome, Wren Halloran/)).toBeTruthy()
    type('New password', 'too short')
    press('Set the password')
    expect(screen.getByText('It has 9 characters; it takes at least 15.')).toBeTruthy()
    type('New password', 'a heron on the mud flat')
    type('The same again', 'a heron on the mudflat')
    expect(screen.getByText('It differs from the first.')).toBeTruthy()
    press('Set the password')
    expect(server.acts()).toEqual([])
    type('The same again', 'a heron on the mud flat')
    press('Set the password')
    expect(await screen.findByRole('heading', { name: 'Your password is set' })).toBeTruthy()
    expect(screen.getByText(/wait until another signer confirms you/)).toBeTruthy()
    expect(server.acts()).toMatchObject([{ path: '/links/use', body: { secret, password: 'a heron on the mud flat' } }])
  })

  it('shows what the server finds wrong with the password beside it', async () => {
    fakeServer({ [`GET /links/${secret}`]: invitation, 'POST /links/use': problem(422, 'weak-password', 'Choose another.', { errors: [{ pointer: '/password', detail: 'is a demo password' }] }) })
    openApp(`/links/${secret}`)
    await screen.findByText(/Welcome, Wren Halloran/)
    type('New password', 'demo only bench lamp')
    type('The same again', 'demo only bench lamp')
    press('Set the password')
    expect(await screen.findByText('is a demo password')).toBeTruthy()
    expect(screen.getByLabelText<HTMLInputElement>('New password').value).toBe('demo only bench lamp')
  })

  it('that was used says so, and where to go', async () => {
    fakeServer({ [`GET /links/${secret}`]: problem(410, 'link-used', 'This invitation was used already.') })
    openApp(`/links/${secret}`)
    expect((await screen.findByRole('alert')).textContent).toContain('This invitation was used already.')
    expect(screen.getByRole('link', { name: 'Ask for a new link' }).getAttribute('href')).toBe('/forgotten')
  })
})

describe('a forgotten password', () => {
  it('answers the same whoever is asked for', async () => {
    const server = fakeServer({ 'POST /reset': { asked: true } })
    openApp('/forgotten')
    await screen.findByRole('heading', { name: 'Forgotten password' })
    press('Send the link')
    expect(screen.getByText('Write your e-mail address.')).toBeTruthy()
    type('E-mail', 'nobody@dunlin.example')
    press('Send the link')
    expect(await screen.findByText(/If Detent knows nobody@dunlin.example/)).toBeTruthy()
    expect(server.acts()).toMatchObject([{ path: '/reset', body: { email: 'nobody@dunlin.example' } }])
  })
})

describe('the account', () => {
  const sessions = [
    { id: 'here', current: true, createdAt: '2026-12-01T09:00:00Z', seenAt: '2026-12-01T09:30:00Z' },
    { id: 'elsewhere', current: false, createdAt: '2026-11-30T09:00:00Z', seenAt: '2026-11-30T10:00:00Z' },
  ]
  const frame = { 'GET /me': aMe({ signingHold: 'password reset' }), 'GET /machines': [], 'GET /account/sessions': { sessions } }

  it('changes the password, and says which one is wrong', async () => {
    const replies: Record<string, unknown> = { ...frame, 'POST /account/password': problem(403, 'wrong-password', 'The present password is wrong.', { errors: [{ pointer: '/current', detail: 'is wrong' }] }) }
    const server = fakeServer(replies)
    openApp('/account')
    await screen.findByRole('heading', { name: 'Silvan Okoro' })
    expect(screen.getByText(/Your signatures wait until another signer confirms you/)).toBeTruthy()
    type('Present password', 'not this one')
    type('New password', 'a heron on the mud flat')
    type('The same again', 'a heron on the mud flat')
    press('Change the password')
    expect(await screen.findByText('is wrong')).toBeTruthy()
    replies['POST /account/password'] = { sessionsEnded: 1 }
    type('Present password', 'a long enough password')
    press('Change the password')
    expect(await screen.findByText('changed; 1 other session ended')).toBeTruthy()
    expect(screen.getByLabelText<HTMLInputElement>('New password').value).toBe('')
    expect(server.acts().at(-1)?.body).toEqual({ current: 'a long enough password', next: 'a heron on the mud flat' })
  })

  it('ends another session, never this one', async () => {
    const server = fakeServer({ ...frame, 'DELETE /account/sessions/elsewhere': { sessions: [sessions[0]] } })
    openApp('/account')
    const buttons = await screen.findAllByRole('button', { name: 'End it' })
    expect(buttons).toHaveLength(1)
    fireEvent.click(buttons[0])
    await waitFor(() => expect(server.acts()).toMatchObject([{ method: 'DELETE', path: '/account/sessions/elsewhere' }]))
  })

  it('keeps the choice of light or dark on this computer', async () => {
    fakeServer(frame)
    openApp('/account')
    fireEvent.change(await screen.findByLabelText('Light or dark'), { target: { value: 'dark' } })
    expect(document.documentElement.dataset.theme).toBe('dark')
    expect(localStorage.getItem('detent-theme')).toBe('dark')
    fireEvent.change(screen.getByLabelText('Light or dark'), { target: { value: 'system' } })
    expect(document.documentElement.dataset.theme).toBeUndefined()
    expect(localStorage.getItem('detent-theme')).toBeNull()
  })
})
