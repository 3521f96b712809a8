// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import type { FindGroup, SearchAnswer } from '../../shared/contract/search.ts'
import { anEngineer, fakeServer } from './fake-server.ts'
import { aMachine } from './a-machine.ts'
import { openApp } from './open-app.tsx'

const joints: FindGroup = {
  kind: 'joint', more: false,
  finds: [
    { name: 'R1 knee', note: 'Dunlin, fore 0x3B, Knee', at: { page: 'joint', machine: 'dunlin', joint: 'r1-knee' } },
    { name: 'R2 knee', note: 'Dunlin, mid 0x3B, Knee', at: { page: 'joint', machine: 'dunlin', joint: 'r2-knee' } },
  ],
}
const changes: FindGroup = {
  kind: 'change', more: true,
  finds: [
    { name: 'Stiffer knee', note: 'Dunlin 50, submitted, by Mirela Castanho', at: { page: 'change', change: 'dunlin-50', draft: false } },
    { name: 'Softer knee', note: 'Dunlin 52, draft, by Mirela Castanho', at: { page: 'change', change: 'dunlin-52', draft: true } },
  ],
}
const answer = (groups: FindGroup[], asked = 'knee'): SearchAnswer => ({ asked, groups })
const frame = (groups: FindGroup[]) => ({ 'GET /me': anEngineer, 'GET /machines': [aMachine()], 'GET /machines/dunlin': aMachine(), 'GET /search': answer(groups) })
/** the field that `/` went to: one of two, by width */
let field: HTMLInputElement
const box = () => field
const key = (k: string) => fireEvent.keyDown(box(), { key: k })

async function typed(groups: FindGroup[], text = 'knee') {
  const server = fakeServer(frame(groups))
  const app = openApp('/search')
  await screen.findByText('Nothing is asked for.')
  // A page that has just come takes the focus; the key is pressed after that.
  await waitFor(() => {
    fireEvent.keyDown(document.body, { key: '/' })
    field = document.activeElement as HTMLInputElement
    expect(screen.getAllByRole('combobox', { name: 'search' })).toContain(field)
  })
  fireEvent.change(box(), { target: { value: text } })
  return { server, app }
}

describe('the search field', () => {
  it('lists finds by kind with where they lead, and says how many', async () => {
    await typed([joints, changes])
    const list = await screen.findByRole('listbox', { name: 'finds' })
    expect(within(within(list).getByRole('group', { name: 'Joints' })).getAllByRole('option').map((o) => o.textContent)).toEqual(['R1 kneeDunlin, fore 0x3B, Knee', 'R2 kneeDunlin, mid 0x3B, Knee'])
    expect(screen.getAllByRole('status').map((s) => s.textContent)).toContain('4 finds')
    expect(box().getAttribute('aria-expanded')).toBe('true')
  })

  it('is walked by arrows around both ends while the focus stays in the field, and Enter opens', async () => {
    const { app } = await typed([joints, changes])
    await screen.findByRole('listbox', { name: 'finds' })
    const active = () => document.getElementById(box().getAttribute('aria-activedescendant') ?? '')?.textContent
    key('ArrowDown')
    expect(active()).toContain('R1 knee')
    key('ArrowUp')
    expect(active()).toContain('Softer knee')
    key('ArrowDown')
    key('ArrowDown')
    expect(active()).toContain('R2 knee')
    expect(document.activeElement).toBe(box())
    fireEvent.submit(box().form!)
    await waitFor(() => expect(app.here()).toBe('/machines/dunlin/joints/r2-knee'))
    expect(screen.queryByRole('listbox')).toBeNull()
  })

  it('closes on Esc and keeps what was typed; a second Esc leaves the field', async () => {
    await typed([joints])
    await screen.findByRole('listbox', { name: 'finds' })
    key('Escape')
    expect(screen.queryByRole('listbox')).toBeNull()
    expect([document.activeElement, box().value]).toEqual([box(), 'knee'])
    key('Escape')
    expect(document.activeElement).toBe(document.body)
  })

  it('leads to the page of all finds when none was walked to', async () => {
    const { app } = await typed([joints, changes])
    await screen.findByRole('listbox', { name: 'finds' })
    fireEvent.submit(box().form!)
    await waitFor(() => expect(app.here()).toBe('/search?q=knee'))
    const region = await screen.findByRole('region', { name: 'Changes' })
    // a draft's values, a submitted change's review
    expect(within(region).getAllByRole('link').map((a) => a.getAttribute('href'))).toEqual(['/changes/dunlin-50/review', '/changes/dunlin-52'])
    expect(within(region).getByText('the first 2')).toBeTruthy()
  })

  it('stays out of fields: / typed in one is a letter', async () => {
    fakeServer(frame([]))
    openApp('/search')
    await screen.findByText('Nothing is asked for.')
    const words = document.body.appendChild(document.createElement('textarea'))
    words.focus()
    fireEvent.keyDown(words, { key: '/' })
    expect(document.activeElement).toBe(words)
    words.remove()
  })

  it('says when nothing is called like that, in the list and on the page', async () => {
    await typed([], 'godwit')
    await waitFor(() => expect(screen.getAllByText('Nothing is called like that.').length).toBeGreaterThan(0))
    openApp('/search?q=godwit')
    expect(await screen.findByRole('heading', { name: '“godwit”' })).toBeTruthy()
  })
})
