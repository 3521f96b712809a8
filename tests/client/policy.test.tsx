// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import { defaultPolicy } from '../../shared/contract/policy.ts'
import type { MachinePolicyView, PolicyView } from '../../shared/contract/policy.ts'
import { contentOf, limitAt, policyFields } from '../../src/features/policy/policy-fields.ts'
import { aMe, fakeServer, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const yes = { allowed: true } as const
const no = (why: string) => ({ allowed: false, why }) as const
const version = (over: Partial<PolicyView> = {}): PolicyView => ({ machine: 'dunlin', number: 1, state: 'in force', content: defaultPolicy, reason: 'The defaults a machine begins with.', author: null, proposedAt: '2026-07-04T09:00:00Z', signedBy: null, signedAt: '2026-07-04T09:00:00Z', may: { sign: no('It does not wait.'), decline: no('It does not wait.') }, ...over })
const policy = (over: Partial<MachinePolicyView> = {}): MachinePolicyView => ({ machine: 'dunlin', machineName: 'Dunlin', inForce: version(), versions: [version()], may: { propose: yes }, ...over })
const frame = { 'GET /me': aMe(), 'GET /machines': [{ key: 'dunlin', name: 'Dunlin', description: '', retired: false, joints: 0, buses: 0, currentVersion: null, openChanges: 0 }] }
const press = (name: string) => fireEvent.click(screen.getByRole('button', { name }))

describe('the fields of a policy', () => {
  it('are every limit once, and make the same content again', () => {
    const leaves = (v: object, at = ''): string[] => Object.entries(v).flatMap(([k, x]) => (typeof x === 'object' ? leaves(x as object, `${at}/${k}`) : [`${at}/${k}`]))
    expect(policyFields.map((f) => f.pointer).toSorted()).toEqual(leaves(defaultPolicy).toSorted())
    expect(contentOf(Object.fromEntries(policyFields.map((f) => [f.pointer, limitAt(defaultPolicy, f.pointer)!])))).toEqual(defaultPolicy)
  })
})

describe('a policy', () => {
  it('is proposed whole, once its limits agree and there is a reason', async () => {
    const server = fakeServer({ ...frame, 'GET /machines/dunlin/policy': policy(), 'POST /machines/dunlin/policy': policy() })
    openApp('/policy')
    fireEvent.click(await screen.findByRole('button', { name: 'Propose another…' }))
    const dialog = screen.getByRole('dialog')
    const set = (label: RegExp, text: string) => fireEvent.change(within(dialog).getByLabelText(label), { target: { value: text } })
    set(/phase margin blocks below/, '40')
    expect(within(dialog).getByText('is above the limit for the worst case')).toBeTruthy()
    set(/phase margin blocks below/, '3o')
    press('Propose it')
    expect(server.acts()).toEqual([])
    set(/phase margin blocks below/, '32')
    press('Propose it')
    expect(server.acts()).toEqual([])
    set(/Reason/, 'Mud is softer than the bench.')
    press('Propose it')
    await waitFor(() => expect(server.acts()).toHaveLength(1))
    expect(server.acts()[0].body).toEqual({ content: { ...defaultPolicy, phaseMarginDeg: { ...defaultPolicy.phaseMarginDeg, block: 32 } }, reason: 'Mud is softer than the bench.' })
  })

  it('that waits shows what it alters, and is signed with the password', async () => {
    const proposed = version({ number: 2, state: 'proposed', author: 'Silvan Okoro', signedAt: null, content: { ...defaultPolicy, overshootPercent: 10 }, may: { sign: yes, decline: yes } })
    const replies: Record<string, unknown> = { ...frame, 'GET /machines/dunlin/policy': policy({ versions: [proposed, version()] }), 'POST /machines/dunlin/policy/2/sign': problem(403, 'wrong-password', 'The password is wrong.', { errors: [{ pointer: '/password', detail: 'is wrong' }] }) }
    const server = fakeServer(replies)
    openApp('/policy?machine=dunlin')
    const table = await screen.findByRole('table', { name: 'policy 2' })
    expect(within(table).getAllByRole('row', { selected: true }).map((r) => r.textContent)).toEqual([expect.stringMatching(/^overshootat most15.*10.*%$/)])
    press('Sign…')
    press('Sign and put in force')
    expect(server.acts()).toEqual([])
    fireEvent.change(screen.getByLabelText('Your password'), { target: { value: 'wrong' } })
    press('Sign and put in force')
    expect(await screen.findByText('is wrong')).toBeTruthy()
    replies['POST /machines/dunlin/policy/2/sign'] = policy()
    press('Sign and put in force')
    await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull())
  })

  it('cannot be signed by its author, who is told so', async () => {
    const proposed = version({ number: 2, state: 'proposed', author: 'Silvan Okoro', signedAt: null, may: { sign: no('You proposed it: another release manager signs it.'), decline: yes } })
    fakeServer({ ...frame, 'GET /machines/dunlin/policy': policy({ versions: [proposed, version()] }) })
    openApp('/policy')
    expect((await screen.findByRole('button', { name: 'Sign…' })).getAttribute('aria-disabled')).toBe('true')
    expect(screen.getByText('You proposed it: another release manager signs it.')).toBeTruthy()
  })
})
