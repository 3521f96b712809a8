// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import { aMachine } from './a-machine.ts'
import { anEngineer, fakeServer } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const frame = {
  'GET /me': anEngineer,
  'GET /machines': [aMachine()],
  'GET /machines/dunlin': aMachine(),
  'GET /changes': aMachine().changes,
  'GET /releases': [],
  'GET /firmware': [],
  'GET /people': { people: [], may: { invite: { allowed: false, why: 'no' } } },
}

describe('the search', () => {
  it('is reached by its key from the bar, and finds by name and by address', async () => {
    fakeServer(frame)
    const app = openApp('/search')
    await screen.findByText('Nothing is asked for.')
    const [box] = screen.getAllByRole('searchbox', { name: 'search' })
    fireEvent.keyDown(document.body, { key: '/' })
    await waitFor(() => expect(document.activeElement?.getAttribute('aria-label')).toBe('search'))
    fireEvent.change(box, { target: { value: '0x3b' } })
    fireEvent.submit(box.closest('form')!)
    await waitFor(() => expect(app.here()).toBe('/search?q=0x3b'))
    const joints = await screen.findByRole('region', { name: 'Joints' })
    expect(within(joints).getAllByRole('link').map((a) => a.getAttribute('href'))).toEqual(['/machines/dunlin/joints/r1-knee'])
  })

  it('leads to a draft’s values and to a submitted change’s review', async () => {
    const [submitted] = aMachine().changes
    fakeServer({ ...frame, 'GET /changes': [submitted, { ...submitted, key: 'dunlin-52', state: 'draft', life: 'draft', title: 'Stiffer winch' }] })
    openApp('/search?q=stiffer')
    const changes = await screen.findByRole('region', { name: 'Changes' })
    expect(within(changes).getAllByRole('link').map((a) => a.getAttribute('href'))).toEqual(['/changes/dunlin-50/review', '/changes/dunlin-52'])
  })

  it('says when nothing is called like that', async () => {
    fakeServer(frame)
    openApp('/search?q=godwit')
    expect(await screen.findByText('Nothing is called like that.')).toBeTruthy()
  })
})
