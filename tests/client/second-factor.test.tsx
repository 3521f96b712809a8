// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import { aMe, fakeServer, notSignedIn, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const type = (label: string, text: string, within_ = screen as Pick<typeof screen, 'getByLabelText'>) => fireEvent.change(within_.getByLabelText(label), { target: { value: text } })
const press = (name: string | RegExp) => fireEvent.click(screen.getByRole('button', { name }))
const none = { since: null, recoveryCodesLeft: 0, missing: false, rule: 'optional' } as const
const set = { since: '2026-03-02T09:00:00.000Z', recoveryCodesLeft: 9, missing: false, rule: 'signers' } as const
const account = { 'GET /machines': [], 'GET /account/sessions': { sessions: [] }, 'GET /account/bench-keys': { keys: [], machines: [], may: { make: { allowed: false, why: 'no' } } } }
const codes = ['AAAA-BBBB-CCCC-DDDD-EEEE-FFFF', '0000-1111-2222-3333-4444-5555']

describe('signing in with a code', () => {
  const door = (answer: unknown) => {
    let signedIn = false
    return fakeServer({
      'GET /workplace': { mode: 'workplace', secondFactor: 'signers', signIns: [] },
      'GET /me': () => (signedIn ? aMe() : notSignedIn),
      'POST /session': { signedIn: false },
      'POST /session/code': () => {
        if (answer) return answer
        signedIn = true
        return { signedIn: true }
      },
      'GET /machines': [],
      'GET /people': { people: [], may: { invite: { allowed: true } } },
    })
  }
  const begin = async () => {
    const app = openApp('/sign-in?next=%2Fpeople')
    await screen.findByRole('heading', { name: 'Sign in' })
    expect(screen.queryByText(/The demo asks/)).toBeNull()
    type('E-mail', 'silvan.okoro@dunlin.example')
    type('Password', 'a long enough password')
    press('Sign in')
    await screen.findByText(/the password was right/)
    return app
  }

  it('asks for it after the password, and goes on from there', async () => {
    const server = door(null)
    const app = await begin()
    const field = screen.getByLabelText<HTMLInputElement>('Code')
    expect(field.autocomplete).toBe('one-time-code')
    type('Code', ' 123 456 ')
    press('Sign in')
    await screen.findByRole('heading', { name: 'People' })
    expect(app.here()).toBe('/people')
    expect(server.acts()[1].body).toEqual({ code: '123 456' })
  })

  it('says beside the field what was wrong, lets go of the code, and leads back to another person', async () => {
    door(problem(403, 'wrong-code', 'The code is wrong. Nothing was done.', { errors: [{ pointer: '/code', detail: 'is wrong' }] }))
    await begin()
    press('Sign in')
    expect(screen.getByText('Enter the code that your app shows.')).toBeTruthy()
    type('Code', '000000')
    press('Sign in')
    expect(await screen.findByText('is wrong')).toBeTruthy()
    expect(screen.getByLabelText<HTMLInputElement>('Code').value).toBe('')
    press('Sign in as another person')
    expect(screen.getByLabelText<HTMLInputElement>('Password').value).toBe('')
  })
})

describe('the own second factor', () => {
  it('is set up by password and code; the recovery codes have to be kept before they go', async () => {
    let own: object = { ...none, missing: true, rule: 'signers' }
    const server = fakeServer({
      ...account,
      'GET /me': () => aMe({ secondFactor: own as never }),
      'POST /account/second-factor': { secret: 'ABCD EFGH', picture: '<svg xmlns="http://www.w3.org/2000/svg"/>' },
      'POST /account/second-factor/confirm': () => {
        own = set
        return { recoveryCodes: codes }
      },
    })
    openApp('/account')
    expect(await screen.findByText('Your signing roles wait until you set one up.')).toBeTruthy()
    press('Set up a second factor…')
    type('Your password', 'a long enough password')
    press('Go on')
    expect((await screen.findByRole<HTMLImageElement>('img', { name: /QR code/ })).src).toMatch(/^data:image\/svg\+xml/)
    expect(screen.getByLabelText('Secret').textContent).toBe('ABCD EFGH')
    type('Code', '123456')
    press('Set it up')
    const list = await screen.findByRole('list', { name: 'recovery codes' })
    expect(within(list).getAllByRole('listitem').map((li) => li.textContent)).toEqual(codes)
    press('Done')
    expect(screen.getByRole('list', { name: 'recovery codes' })).toBeTruthy()
    fireEvent.click(screen.getByLabelText('I have kept them'))
    press('Done')
    await waitFor(() => expect(screen.queryByRole('list', { name: 'recovery codes' })).toBeNull())
    expect(screen.getByText(/9 recovery codes left/)).toBeTruthy()
    expect(server.acts().map((a) => a.body)).toEqual([{ password: 'a long enough password' }, { code: '123456' }])
  })

  it('is removed and renewed by password and code, each refusal beside its field', async () => {
    const server = fakeServer({
      ...account,
      'GET /me': aMe({ secondFactor: set }),
      'POST /account/second-factor/remove': problem(403, 'wrong-password', 'The password is wrong.', { errors: [{ pointer: '/password', detail: 'is not yours' }] }),
      'POST /account/recovery-codes': { recoveryCodes: null },
    })
    openApp('/account')
    await screen.findByText(/9 recovery codes left/)
    press('Remove it…')
    const dialog = screen.getByRole('dialog', { name: 'Remove the second factor' })
    expect(within(dialog).getByText(/Signing roles wait until you set up another one/)).toBeTruthy()
    type('Your password', 'not mine at all', within(dialog))
    type('Code', '123456', within(dialog))
    fireEvent.click(within(dialog).getByRole('button', { name: 'Remove it' }))
    expect(await within(dialog).findByText('is not yours')).toBeTruthy()
    fireEvent.click(within(dialog).getByRole('button', { name: 'Cancel' }))
    press('New recovery codes…')
    const renew = screen.getByRole('dialog', { name: 'New recovery codes' })
    type('Your password', 'a long enough password', within(renew))
    type('Code', '654321', within(renew))
    fireEvent.click(within(renew).getByRole('button', { name: 'Make new ones' }))
    expect(await screen.findByText(/the codes were shown then/)).toBeTruthy()
    expect(server.acts().at(-1)?.body).toEqual({ password: 'a long enough password', code: '654321' })
  })

  it('is asked for on every page of who signs and has none', async () => {
    fakeServer({ ...account, 'GET /me': aMe({ secondFactor: { ...none, missing: true, rule: 'signers' } }), 'GET /people': { people: [], may: { invite: { allowed: false, why: 'no' } } } })
    openApp('/people')
    expect(await screen.findByText(/You can sign nothing yet/)).toBeTruthy()
    expect(screen.getByRole<HTMLAnchorElement>('link', { name: 'Set one up' }).getAttribute('href')).toBe('/account')
  })

  it('is asked for over the page before a signature, where the workplace wants that', async () => {
    const server = fakeServer({
      ...account,
      'GET /me': aMe(),
      'POST /account/password': problem(403, 'code-asked', 'This workplace asks for a code.'),
      'POST /account/code': { until: '2026-03-02T09:05:00.000Z' },
    })
    openApp('/account')
    type('Present password', 'a long enough password', { getByLabelText: (await screen.findByRole('heading', { name: 'Password' })) && screen.getByLabelText })
    type('New password', 'quite another long one')
    type('The same again', 'quite another long one')
    press('Change the password')
    const dialog = await screen.findByRole('dialog', { name: 'Enter a code before you sign' })
    type('Code', '123456', within(dialog))
    fireEvent.click(within(dialog).getByRole('button', { name: 'Enter it' }))
    await waitFor(() => expect(screen.queryByRole('dialog', { name: 'Enter a code before you sign' })).toBeNull())
    expect(screen.getByLabelText<HTMLInputElement>('New password').value).toBe('quite another long one')
    expect(server.acts().at(-1)?.body).toEqual({ code: '123456' })
  })
})
