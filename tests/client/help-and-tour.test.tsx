// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, render, screen, waitFor, within } from '@testing-library/react'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { helpBeside } from '../../src/app/help-key.ts'
import { HelpButton } from '../../src/components/ui/help-button.tsx'
import { endTour, openTour } from '../../src/lib/tour-state.ts'
import { anEngineer, fakeServer } from './fake-server.ts'
import { aMachine } from './a-machine.ts'
import { openApp } from './open-app.tsx'

// jsdom has no popovers. What matters here: opened when shown, told when closed.
beforeEach(() => {
  HTMLElement.prototype.showPopover = () => {}
  HTMLElement.prototype.hidePopover = function () {
    this.dispatchEvent(Object.assign(new Event('toggle'), { newState: 'closed' }))
  }
})

describe('the question mark', () => {
  it('opens an explanation with formula and source, takes the focus in, and gives it back on Esc', async () => {
    render(<HelpButton topic="role:velocity.kp" about="velocity gain" />)
    const button = screen.getByRole('button', { name: 'what is velocity gain?' })
    fireEvent.click(button)
    const dialog = await screen.findByRole('dialog', { name: 'Velocity gain' })
    expect(within(dialog).getByText(/K_pv·e_ω/)).toBeTruthy()
    expect(within(dialog).getByText(/^Source: /)).toBeTruthy()
    await waitFor(() => expect(document.activeElement).toBe(dialog))
    fireEvent.keyDown(dialog, { key: 'Escape' })
    await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull())
    expect(document.activeElement).toBe(button)
  })

  it('is found by F1 beside the focus: in its cell first, else the one of the value chosen', () => {
    const { container } = render(
      <main>
        <div className="value-cell"><input aria-label="velocity gain" /><HelpButton topic="role:velocity.kp" about="velocity gain" /></div>
        <table><tbody><tr><td><input aria-label="cell" /></td></tr></tbody></table>
        <HelpButton topic="role:position.kp" about="position gain" ofChosen />
      </main>,
    )
    const beside = (label: string) => helpBeside(screen.getByLabelText(label))?.getAttribute('aria-label')
    expect(beside('velocity gain')).toBe('what is velocity gain?')
    expect(beside('cell')).toBe('what is position gain?')
    container.querySelector("[data-help='chosen']")!.remove()
    expect(helpBeside(screen.getByLabelText('cell'))).toBeNull()
  })
})

const frame = {
  'GET /me': anEngineer, 'GET /machines': [aMachine()], 'GET /changes': aMachine().changes, 'GET /releases': [], 'GET /boards': { boards: [], mayRecordOn: [] },
  'GET /search': { asked: '', groups: [] },
}

describe('the help page', () => {
  it('is where F1 leads when nothing stands beside the focus; it filters', async () => {
    fakeServer(frame)
    const app = openApp('/search')
    await screen.findByText('Nothing is asked for.')
    fireEvent.keyDown(document.body, { key: 'F1' })
    await waitFor(() => expect(app.here()).toBe('/help'))
    fireEvent.change(await screen.findByLabelText('filter explanations'), { target: { value: 'watchdog' } })
    await waitFor(() => expect(screen.getAllByRole('article')).toHaveLength(2))
  })
})

describe('the tour', () => {
  afterEach(() => endTour())

  it('walks through real screens, can be left with Esc and taken up where it was left', async () => {
    fakeServer(frame)
    const app = openApp('/help')
    fireEvent.click(await screen.findByRole('button', { name: 'Take the tour' }))
    const panel = () => screen.findByRole('complementary', { name: /./ })
    expect(within(await panel()).getByRole('heading').textContent).toBe('A gain is stopped')
    expect(within(await panel()).getByText('step 1 of 5')).toBeTruthy()
    fireEvent.click(screen.getByRole('button', { name: 'Next' }))
    fireEvent.click(screen.getByRole('button', { name: 'Next' }))
    // the change of this workplace that waits for a signature
    await waitFor(() => expect(app.here()).toBe('/changes/dunlin-50/review'))
    fireEvent.keyDown(await panel(), { key: 'Escape' })
    expect(screen.queryByRole('complementary')).toBeNull()
    openTour()
    await waitFor(async () => expect(within(await panel()).getByRole('heading').textContent).toBe('A change is signed'))
    fireEvent.click(screen.getByRole('button', { name: 'Next' }))
    await waitFor(() => expect(app.here()).toBe('/releases'))
    fireEvent.click(screen.getByRole('button', { name: 'Next' }))
    fireEvent.click(await screen.findByRole('button', { name: 'Done' }))
    expect(screen.queryByRole('complementary')).toBeNull()
  })
})
