// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import { aMe, fakeServer, notSignedIn, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const demo = { mode: 'demo', secondFactor: 'optional', signIns: [{ name: 'Mirela Castanho', email: 'mirela.castanho@dunlin.example', password: 'demo only mudflat knee', roles: 'controls engineer' }] }
const type = (label: string, text: string) => fireEvent.change(screen.getByLabelText(label), { target: { value: text } })
const press = (name: string | RegExp) => fireEvent.click(screen.getByRole('button', { name }))

/** Signed out until a session is posted. */
function door(workplace: unknown, more: Record<string, unknown> = {}) {
  let signedIn = false
  return fakeServer({
    'GET /workplace': workplace,
    'GET /me': () => (signedIn ? aMe() : notSignedIn),
    'POST /session': () => {
      signedIn = true
      return { signedIn: true }
    },
    'GET /machines': [],
    'GET /people': { people: [], may: { invite: { allowed: true } } },
    ...more,
  })
}

describe('signing in', () => {
  it('leads back to the page that was asked for', async () => {
    const server = door(demo)
    const app = openApp('/people?filter=wren')
    await screen.findByRole('heading', { name: 'Sign in' })
    expect(app.here()).toBe('/sign-in?next=%2Fpeople%3Ffilter%3Dwren')
    type('E-mail', ' silvan.okoro@dunlin.example ')
    type('Password', 'a long enough password')
    press('Sign in')
    await screen.findByRole('heading', { name: 'People' })
    expect(app.here()).toBe('/people?filter=wren')
    expect(server.acts()[0].body).toEqual({ email: 'silvan.okoro@dunlin.example', password: 'a long enough password' })
  })

  it('never leads to another site', async () => {
    door(demo, { 'GET /changes': [] })
    const app = openApp('/sign-in?next=%2F%2Fevil.example')
    await screen.findByRole('heading', { name: 'Sign in' })
    type('E-mail', 'silvan.okoro@dunlin.example')
    type('Password', 'x')
    press('Sign in')
    await waitFor(() => expect(app.here()).toBe('/'))
  })

  it('asks for what is missing and sends nothing', async () => {
    const server = door(demo)
    openApp('/sign-in')
    await screen.findByRole('heading', { name: 'Sign in' })
    press('Sign in')
    expect(screen.getByText('Write your e-mail address.')).toBeTruthy()
    expect(screen.getByText('Write your password.')).toBeTruthy()
    expect(server.acts()).toEqual([])
  })

  it('keeps what was typed when it is refused, and says why', async () => {
    door(demo, { 'POST /session': problem(401, 'wrong-credentials', 'The name or the password is wrong.') })
    openApp('/sign-in')
    await screen.findByRole('heading', { name: 'Sign in' })
    type('E-mail', 'mirela.castanho@dunlin.example')
    type('Password', 'wrong')
    press('Sign in')
    expect((await screen.findByRole('alert')).textContent).toContain('The name or the password is wrong.')
    expect(screen.getByLabelText<HTMLInputElement>('E-mail').value).toBe('mirela.castanho@dunlin.example')
    expect(screen.getByLabelText<HTMLInputElement>('Password').value).toBe('wrong')
  })

  it('fills the form from the people of the demo, in demo mode only', async () => {
    door(demo)
    openApp('/sign-in')
    fireEvent.click(await screen.findByRole('button', { name: /Mirela Castanho/ }))
    expect(screen.getByLabelText<HTMLInputElement>('E-mail').value).toBe('mirela.castanho@dunlin.example')
    expect(screen.getByLabelText<HTMLInputElement>('Password').value).toBe('demo only mudflat knee')
  })

  it('shows no passwords in a real workplace, whatever is sent', async () => {
    const server = door({ ...demo, mode: 'workplace' })
    openApp('/sign-in')
    await screen.findByRole('heading', { name: 'Sign in' })
    await waitFor(() => expect(server.asked.some((a) => a.path === '/workplace')).toBe(true))
    expect(screen.queryByText('demo only mudflat knee')).toBeNull()
  })
})

describe('a session that ends', () => {
  it('is renewed over the page, whose typed text stays, and acts carry the new token', async () => {
    let tokens = ['token-1']
    const server = fakeServer({
      'GET /me': () => (tokens.length > 0 ? aMe({ token: tokens[0] }) : notSignedIn),
      'GET /machines': [],
      'GET /people': { people: [], may: { invite: { allowed: true } } },
      'POST /people': () => (tokens.length > 0 ? { id: 9 } : notSignedIn),
      'GET /people/9': problem(404, 'not-found', 'none'),
      'POST /session': () => {
        tokens = ['token-2']
        return { signedIn: true }
      },
    })
    openApp('/people')
    fireEvent.click(await screen.findByRole('button', { name: 'Invite a person…' }))
    type('Name', 'Wren Halloran')
    type('E-mail', 'wren@dunlin.example')
    tokens = []
    press('Send the invitation')
    const again = await screen.findByRole('dialog', { name: 'Sign in again' })
    fireEvent.change(await within(again).findByLabelText('Password'), { target: { value: 'a long enough password' } })
    fireEvent.click(within(again).getByRole('button', { name: 'Sign in' }))
    await waitFor(() => expect(screen.queryByRole('dialog', { name: 'Sign in again' })).toBeNull())
    expect(screen.getByLabelText<HTMLInputElement>('Name').value).toBe('Wren Halloran')
    expect(server.acts().at(-1)?.body).toEqual({ email: 'silvan.okoro@dunlin.example', password: 'a long enough password' })
    press('Send the invitation')
    await waitFor(() => expect(server.acts().at(-1)).toMatchObject({ path: '/people', headers: { 'X-Detent-Token': 'token-2' } }))
  })
})

describe('pages that are not there', () => {
  it('say so inside the frame', async () => {
    fakeServer({ 'GET /me': aMe(), 'GET /machines': [] })
    openApp('/no/such/page')
    await screen.findByRole('heading', { name: 'Nothing here' })
    expect(screen.getByRole('navigation', { name: 'main' })).toBeTruthy()
  })

  it('say what the server said of a machine that may not be read', async () => {
    fakeServer({ 'GET /me': aMe(), 'GET /machines': [] })
    openApp('/machines/godwit')
    await screen.findByRole('heading', { name: 'Nothing here' })
    expect(screen.getByRole('alert').textContent).toContain('Nothing answers GET /machines/godwit.')
  })
})
