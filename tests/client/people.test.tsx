// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import type { PersonView } from '../../shared/contract/people.ts'
import { aMe, anEngineer, fakeServer, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const yes = { allowed: true } as const
const no = (why: string) => ({ allowed: false, why }) as const
const aPerson = (over: Partial<PersonView> = {}): PersonView => ({
  id: 9,
  name: 'Wren Halloran',
  email: 'wren@dunlin.example',
  state: 'active',
  signingHold: null,
  secondFactor: true,
  roles: [{ id: 31, role: 'peer reviewer', machine: 'dunlin', confirmed: true }],
  may: { grantRoles: yes, endRoles: yes, disable: yes, enable: no('Wren Halloran is not disabled.'), reset: yes, resetSecondFactor: yes, confirmSigning: no('Wren Halloran has no signing right that waits.') },
  ...over,
})
const machines = [{ key: 'dunlin', name: 'Dunlin', description: '', retired: false, joints: 19, buses: 3, currentVersion: '1.7.0', openChanges: 0 }]
const frame = { 'GET /me': aMe(), 'GET /machines': machines }
const press = (name: string | RegExp) => fireEvent.click(screen.getByRole('button', { name }))

describe('people', () => {
  it('are listed with where their roles hold, and narrowed by the filter in the address', async () => {
    fakeServer({ ...frame, 'GET /people': { people: [aPerson(), aPerson({ id: 2, name: 'Mirela Castanho', roles: [] })], may: { invite: yes } } })
    const app = openApp('/people')
    expect((await screen.findByRole('row', { name: /Wren Halloran/ })).textContent).toContain('peer reviewer on Dunlin')
    fireEvent.change(screen.getByLabelText('filter people'), { target: { value: 'reviewer' } })
    expect(screen.getByLabelText<HTMLInputElement>('filter people').value).toBe('reviewer')
    expect(screen.queryByRole('row', { name: /Mirela/ })).toBeNull()
    await waitFor(() => expect(app.here()).toBe('/people?filter=reviewer'))
  })

  it('are invited with roles on machines; what the server finds wrong stands beside its field', async () => {
    const server = fakeServer({
      ...frame,
      'GET /people': { people: [], may: { invite: yes } },
      'POST /people': problem(409, 'already-exists', 'There is somebody with this address.', { errors: [{ pointer: '/email', detail: 'is taken already' }, { pointer: '/roles/1/machine', detail: 'is no machine' }] }),
    })
    openApp('/people')
    press(await screen.findByRole('button', { name: 'Invite a person…' }).then(() => 'Invite a person…'))
    const dialog = screen.getByRole('dialog', { name: 'Invite a person' })
    fireEvent.change(within(dialog).getByLabelText('Name'), { target: { value: 'Wren Halloran' } })
    fireEvent.change(within(dialog).getByLabelText('E-mail'), { target: { value: 'wren@dunlin.example' } })
    press('One more role')
    const [, second] = within(dialog).getAllByLabelText('Role')
    const [, on] = await waitFor(() => {
      const selects = within(dialog).getAllByLabelText('On')
      expect(within(selects[1]).getByText('Dunlin')).toBeTruthy()
      return selects
    })
    fireEvent.change(second, { target: { value: 'release manager' } })
    fireEvent.change(on, { target: { value: 'dunlin' } })
    expect(within(dialog).getByText(/no right to sign until another signer confirms/)).toBeTruthy()
    press('Send the invitation')
    expect(await within(dialog).findByText('is taken already')).toBeTruthy()
    expect(within(dialog).getByText('is no machine')).toBeTruthy()
    expect(server.acts()[0].body).toEqual({ name: 'Wren Halloran', email: 'wren@dunlin.example', roles: [{ role: 'observer', machine: null }, { role: 'release manager', machine: 'dunlin' }] })
  })

  it('cannot be invited by whoever may not', async () => {
    fakeServer({ 'GET /me': anEngineer, 'GET /machines': machines, 'GET /people': { people: [aPerson({ email: null })], may: { invite: no('This takes the role administrator.') } } })
    openApp('/people')
    await screen.findByRole('row', { name: /Wren Halloran/ })
    expect(screen.queryByRole('button', { name: /Invite/ })).toBeNull()
    expect(screen.queryByRole('columnheader', { name: /E-mail/ })).toBeNull()
  })
})

describe('a person', () => {
  it('is disabled only once their name is written', async () => {
    let person = aPerson()
    const server = fakeServer({ ...frame, 'GET /people/9': () => person, 'POST /people/9/disable': () => (person = aPerson({ state: 'disabled' })) })
    openApp('/people/9')
    fireEvent.click(await screen.findByRole('button', { name: 'Disable…' }))
    press('Disable')
    expect(server.acts()).toEqual([])
    fireEvent.change(screen.getByLabelText('Write the name of the person'), { target: { value: 'Wren Halloran' } })
    press('Disable')
    expect(await screen.findByRole('button', { name: 'Enable' })).toBeTruthy()
    expect(server.acts()).toMatchObject([{ path: '/people/9/disable', headers: { 'X-Detent-Token': 'token-of-silvan' } }])
  })

  it('loses a role by its name', async () => {
    const server = fakeServer({ ...frame, 'GET /people/9': aPerson(), 'DELETE /people/9/roles/31': aPerson({ roles: [] }) })
    openApp('/people/9')
    fireEvent.click(await screen.findByRole('button', { name: 'End the role peer reviewer…' }))
    fireEvent.change(screen.getByLabelText('Write the name of the role'), { target: { value: 'peer reviewer' } })
    press('End the role')
    await waitFor(() => expect(server.acts()).toMatchObject([{ method: 'DELETE', path: '/people/9/roles/31' }]))
  })

  it('who waits to sign is confirmed by another signer, and whoever may not is told why', async () => {
    const waiting = { roles: [{ id: 31, role: 'peer reviewer', machine: null, confirmed: false }] } as const
    let person = aPerson({ ...waiting, roles: [...waiting.roles], may: { ...aPerson().may, confirmSigning: yes } })
    const server = fakeServer({ ...frame, 'GET /people/9': () => person, 'POST /people/9/confirm-signing': () => (person = aPerson()) })
    openApp('/people/9')
    fireEvent.click(await screen.findByRole('button', { name: 'Confirm that Wren Halloran signs' }))
    await waitFor(() => expect(screen.queryByText('Wren Halloran cannot sign yet')).toBeNull())
    expect(server.acts()).toMatchObject([{ path: '/people/9/confirm-signing' }])
  })

  it('who waits to sign cannot be confirmed by whoever granted it', async () => {
    const server = fakeServer({ ...frame, 'GET /people/9': aPerson({ roles: [{ id: 31, role: 'peer reviewer', machine: null, confirmed: false }], may: { ...aPerson().may, confirmSigning: no('You granted this role: another signer confirms it.') } }) })
    openApp('/people/9')
    const button = await screen.findByRole('button', { name: 'Confirm that Wren Halloran signs' })
    expect(button.getAttribute('aria-disabled')).toBe('true')
    expect(screen.getByText('You granted this role: another signer confirms it.')).toBeTruthy()
    fireEvent.click(button)
    expect(server.acts()).toEqual([])
  })
})
