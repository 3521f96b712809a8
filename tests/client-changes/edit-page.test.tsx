// @vitest-environment jsdom
import '../components/setup-dom.ts'
import { act, fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import type { ChangeView } from '../../shared/contract/changes.ts'
import type { Edit } from '../../shared/parameters/edits.ts'
import { conflictsWith } from '../../shared/parameters/edits.ts'
import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import { editText, readText, withNumericAddresses } from '../../shared/parameters/set-text.ts'
import { aChange } from './a-change.ts'
import { aCheck, finding } from './a-check.ts'
import { address, anApi, mirela, open, refusal } from './a-desk.tsx'

/** The API of one draft, keeping what is saved in it. */
function aDraft(over: Partial<ChangeView> = {}, check = aCheck()) {
  const draft = { view: aChange(over) }
  const next = (patch: Partial<ChangeView>) => (draft.view = { ...draft.view, ...patch, revision: draft.view.revision + 1 })
  const api = anApi(mirela, {
    'GET /changes/dunlin-47': () => ({ body: draft.view }),
    'GET /changes/dunlin-47/check': { body: check },
    'GET /changes/dunlin-47/version': { body: { version: '1.8.0', step: 'minor', because: ['current limit alters'] } },
    'PATCH /changes/dunlin-47/values': ({ body }) => {
      const { edits } = body as { edits: Edit[] }
      const conflicts = conflictsWith(draft.view.set, edits)
      if (conflicts.length > 0) return { status: 409, body: { type: '/problems/value-conflict', title: 'x', detail: 'x', errors: [], conflicts: conflicts.map((c) => ({ pointer: c.edit.pointer, yours: c.edit.to, now: c.now })) } }
      const text = editText(draft.view.text, edits)
      const read = readText(text)
      return { body: next({ text, set: withNumericAddresses(read.ok && read.document) as MachineSet }) }
    },
    'PATCH /changes/dunlin-47': ({ body }) => ({ body: next(body as Partial<ChangeView>) }),
    'POST /changes/dunlin-47/submit': () => ({ body: next({ state: 'submitted', life: 'submitted', may: { ...draft.view.may, edit: { allowed: false, why: 'The change is submitted.' } } }) }),
  })
  return { draft, ...api, edits: () => api.acts().filter((a) => a.path.endsWith('/values')).flatMap((a) => (a.body as { edits: Edit[] }).edits) }
}

const field = (name: string) => screen.findByRole('textbox', { name }) as Promise<HTMLInputElement>
const settle = async (name: string, text: string) => {
  const input = await field(name)
  fireEvent.change(input, { target: { value: text } })
  fireEvent.keyDown(input, { key: 'Enter' })
  return input
}

describe('the cascade', () => {
  it('takes a typed unit, saves the edit with what was seen there, and says when', async () => {
    const { edits } = aDraft()
    open('/changes/dunlin-47?family=knee')
    await settle('Current limit', '350 mA')
    await waitFor(() => expect(edits()).toEqual([{ pointer: '/families/knee/values/currentLimit', from: 2.8, to: 0.35 }]))
    await screen.findByText('saved', { exact: false, selector: '[role="status"]' })
    expect((await field('Current limit')).value).toBe('0.35')
  })

  it('says in words what does not fit, and keeps the value', async () => {
    const { edits } = aDraft()
    open('/changes/dunlin-47?family=knee')
    const input = await settle('Samples', '72')
    expect((await screen.findByRole('alert')).textContent).toMatch(/72 samples is above the maximum 64\. 14 is kept\./)
    expect(input.getAttribute('aria-invalid')).toBe('true')
    expect(edits()).toEqual([])
  })

  it('takes an edit back and forth', async () => {
    const { draft } = aDraft()
    open('/changes/dunlin-47?family=knee')
    await settle('Velocity gain', '5.6')
    await waitFor(() => expect(draft.view.set.families.knee.values.velocityGain).toBe(5.6))
    fireEvent.click(screen.getByRole('button', { name: 'undo' }))
    await waitFor(() => expect(draft.view.set.families.knee.values.velocityGain).toBe(3.2))
    fireEvent.keyDown(document.body, { key: 'z', ctrlKey: true, shiftKey: true })
    await waitFor(() => expect(draft.view.set.families.knee.values.velocityGain).toBe(5.6))
  })

  it('shows one joint, and sets it back to what it inherits', async () => {
    const { edits } = aDraft()
    open('/changes/dunlin-47?joint=r3-knee')
    expect((await field('Velocity gain')).value).toBe('2.9')
    fireEvent.click(screen.getByRole('button', { name: /set back to family 3\.2/ }))
    await waitFor(() => expect(edits()).toEqual([{ pointer: '/joints/r3-knee/values/velocityGain', from: 2.9 }]))
  })

  it('shows a conflict with both values and lets one stay', async () => {
    const { draft, edits } = aDraft()
    open('/changes/dunlin-47?family=knee')
    await field('Velocity gain')
    draft.view = { ...draft.view, revision: 4, set: { ...draft.view.set, families: { ...draft.view.set.families, knee: { ...draft.view.set.families.knee, values: { ...draft.view.set.families.knee.values, velocityGain: 5.2 } } } } }
    await settle('Velocity gain', '5.6')
    const conflict = await screen.findByRole('region', { name: 'conflict at Velocity gain of the Knee family' })
    expect(conflict.textContent).toContain('theirs 5.2')
    expect(conflict.textContent).toContain('yours 5.6')
    draft.view = { ...draft.view, text: draft.view.text.replace('"velocityGain": 3.2', '"velocityGain": 5.2') }
    fireEvent.click(within(conflict).getByRole('button', { name: 'Set mine' }))
    await waitFor(() => expect(edits().at(-1)).toEqual({ pointer: '/families/knee/values/velocityGain', from: 5.2, to: 5.6 }))
  })
})

describe('the table', () => {
  const cell = async (name: RegExp) => screen.findByRole('gridcell', { name })
  const focus = (element: HTMLElement) => act(() => element.focus())

  it('is walked and edited with keys alone', async () => {
    const { edits } = aDraft()
    open('/changes/dunlin-47?view=table&family=knee')
    const start = await cell(/^Position gain, Knee family: 36/)
    focus(start)
    for (const key of ['ArrowDown', 'ArrowDown', 'ArrowRight']) fireEvent.keyDown(document.activeElement!, { key })
    expect(document.activeElement?.getAttribute('aria-label')).toBe('Velocity gain, L1 knee: 3.2, from family')
    fireEvent.keyDown(document.activeElement!, { key: '4' })
    const input = screen.getByRole('textbox', { name: 'Velocity gain, L1 knee' })
    expect((input as HTMLInputElement).value).toBe('4')
    fireEvent.change(input, { target: { value: '4.5' } })
    fireEvent.keyDown(input, { key: 'Enter' })
    await waitFor(() => expect(edits()).toEqual([{ pointer: '/joints/l1-knee/values/velocityGain', to: 4.5 }]))
    expect(document.activeElement?.getAttribute('aria-label')).toMatch(/^Velocity integral gain, L1 knee/)
    const own = await cell(/^Velocity gain, R3 knee: 2.9, from joint/)
    focus(own)
    fireEvent.keyDown(own, { key: 'Delete' })
    await cell(/^Velocity gain, R3 knee: 3.2, from family, released 2.9/)
    await waitFor(() => expect(edits().at(-1)).toEqual({ pointer: '/joints/r3-knee/values/velocityGain', from: 2.9 }))
  })

  it('gives a joint value to the whole family in one act', async () => {
    const { acts } = aDraft()
    open('/changes/dunlin-47?view=table&family=knee')
    focus(await cell(/^Velocity gain, R3 knee/))
    fireEvent.click(await screen.findByRole('button', { name: 'Give to the whole family' }))
    const saves = () => acts().filter((a) => a.path.endsWith('/values'))
    await waitFor(() => expect(saves()).toHaveLength(1))
    expect(saves()[0].body).toEqual({ edits: [{ pointer: '/families/knee/values/velocityGain', from: 3.2, to: 2.9 }, { pointer: '/joints/r3-knee/values/velocityGain', from: 2.9 }] })
  })

  it('shows a pasted block before it is taken, and takes the good cells in one act', async () => {
    const { acts } = aDraft()
    open('/changes/dunlin-47?view=table&family=knee')
    const start = await cell(/^Velocity gain, L1 knee/)
    focus(start)
    const clipboardData = { getData: () => '3.5\tfast\n30\t30' }
    fireEvent.paste(start, { clipboardData })
    const dialog = await screen.findByRole('dialog', { name: 'Paste a block' })
    expect(within(dialog).getByRole('list', { name: "cells that can't be taken" }).textContent).toMatch(/^Velocity gain, R3 knee: “fast”/)
    fireEvent.click(within(dialog).getByRole('button', { name: 'Take the 3 good ones' }))
    const saves = () => acts().filter((a) => a.path.endsWith('/values'))
    await waitFor(() => expect(saves()).toHaveLength(1))
    expect(saves()[0].body).toEqual({ edits: [{ pointer: '/joints/l1-knee/values/velocityGain', to: 3.5 }, { pointer: '/joints/l1-knee/values/velocityIntegralGain', to: 30 }, { pointer: '/joints/r3-knee/values/velocityIntegralGain', to: 30 }] })
    fireEvent.click(screen.getByRole('button', { name: 'undo' }))
    await cell(/^Velocity gain, L1 knee: 3.2, from family/)
  })

  it('fills a value to the joints chosen', async () => {
    const { acts } = aDraft()
    open('/changes/dunlin-47?view=table&family=knee')
    focus(await cell(/^Velocity gain, R3 knee/))
    fireEvent.keyDown(document.activeElement!, { key: 'd', ctrlKey: true })
    const dialog = await screen.findByRole('dialog', { name: /^Fill velocity gain 2\.9/ })
    fireEvent.click(within(dialog).getByRole('checkbox', { name: 'L1 knee' }))
    fireEvent.click(within(dialog).getByRole('button', { name: 'Fill 1 place' }))
    await waitFor(() => expect(acts().filter((a) => a.path.endsWith('/values')).map((a) => a.body)).toEqual([{ edits: [{ pointer: '/joints/l1-knee/values/velocityGain', to: 2.9 }] }]))
  })

  it('shows only what is altered when asked', async () => {
    aDraft()
    open('/changes/dunlin-47?view=table&family=knee&columns=family&show=changed')
    await screen.findByText('No value here differs from the release')
  })

  it('edits addresses in hexadecimal, and says at once when two boards answer', async () => {
    const { edits } = aDraft()
    open('/changes/dunlin-47?view=table&family=knee')
    const input = (await screen.findByRole('textbox', { name: 'address of R3 knee' })) as HTMLInputElement
    expect(input.value).toBe('0x3B')
    fireEvent.change(input, { target: { value: '0x40' } })
    fireEvent.keyDown(input, { key: 'Enter' })
    await waitFor(() => expect(edits()).toEqual([{ pointer: '/joints/r3-knee/address', from: 0x3b, to: 0x40 }]))
    await screen.findByText('winch answers there too.')
  })

  it('edits the drive train in units that read well, bounds included', async () => {
    const { edits } = aDraft()
    open('/changes/dunlin-47?view=table&family=knee')
    const L = (await screen.findByRole('textbox', { name: 'winding inductance, value' })) as HTMLInputElement
    expect(L.value).toBe('0.42')
    fireEvent.change(L, { target: { value: '450 µH' } })
    fireEvent.keyDown(L, { key: 'Enter' })
    const low = screen.getByRole('textbox', { name: 'winding inductance, low' })
    fireEvent.change(low, { target: { value: '0.4' } })
    fireEvent.keyDown(low, { key: 'Enter' })
    await waitFor(() => expect(edits()).toEqual([{ pointer: '/families/knee/driveTrain/L', from: 0.00042, to: { value: 0.00045, low: 0.0004, high: 0.00045 } }]))
  })

  it('adds a joint with a key and a free address of its own', async () => {
    const { edits } = aDraft()
    open('/changes/dunlin-47?view=table&family=knee')
    fireEvent.click(await screen.findByRole('button', { name: 'Add a joint' }))
    const dialog = screen.getByRole('dialog', { name: 'Add a joint' })
    fireEvent.click(within(dialog).getByRole('button', { name: 'Add it' }))
    expect(within(dialog).getByText('A joint needs a name with a letter or digit.')).toBeTruthy()
    fireEvent.change(within(dialog).getByLabelText('Name'), { target: { value: 'L2 knee' } })
    fireEvent.click(within(dialog).getByRole('button', { name: 'Add it' }))
    await waitFor(() => expect(edits()).toEqual([{ pointer: '/joints/l2-knee', to: { name: 'L2 knee', family: 'knee', bus: 'fore', address: 8, firmware: 'hinge 2.1.0', values: {} } }]))
    expect(address()).toBe('/changes/dunlin-47?view=table&joint=l2-knee')
  })
})

describe('submitting', () => {
  it('is held back in words while something blocks', async () => {
    aDraft({}, aCheck({ verdict: 'unstable', findings: [finding({ level: 'block', text: 'The closed loop is unstable.' })] }))
    open('/changes/dunlin-47?family=knee')
    expect(await screen.findByText('1 finding blocks')).toBeTruthy()
    expect(screen.getByRole('button', { name: 'Submit' }).getAttribute('aria-description')).toBe('Not yet: 1 finding blocks.')
  })

  it('asks for a concession first, then goes with the revision shown', async () => {
    const { acts, draft } = aDraft({}, aCheck({ findings: [finding()] }))
    open('/changes/dunlin-47?family=knee')
    fireEvent.click(await screen.findByRole('button', { name: 'Request the concession' }))
    const dialog = screen.getByRole('dialog')
    fireEvent.click(within(dialog).getByRole('button', { name: 'Request it' }))
    expect(within(dialog).getByText('Say why it is safe all the same.')).toBeTruthy()
    expect(within(dialog).getByText('A concession needs an end.')).toBeTruthy()
    fireEvent.change(within(dialog).getByLabelText('Reason'), { target: { value: 'The stop takes the torque.' } })
    fireEvent.change(within(dialog).getByLabelText('It ends'), { target: { value: 'count' } })
    fireEvent.change(within(dialog).getByLabelText('Boards'), { target: { value: '6' } })
    fireEvent.click(within(dialog).getByRole('button', { name: 'Request it' }))
    await waitFor(() => expect(draft.view.concessions).toEqual([{ finding: 'torque against gear/knee', characteristic: 'torque against gear', limit: '6.97 N·m', reason: 'The stop takes the torque.', until: null, count: 6 }]))
    await screen.findByText('1 concession requested')
    await waitFor(() => expect(screen.getByRole('button', { name: 'Submit' }).getAttribute('aria-disabled')).toBeNull())
    fireEvent.click(screen.getByRole('button', { name: 'Submit' }))
    await waitFor(() => expect(address()).toBe('/changes/dunlin-47/review'))
    expect(acts().at(-1)).toMatchObject({ path: '/changes/dunlin-47/submit', ifMatch: '"4"' })
  })

  it("shows the server's refusal in words", async () => {
    const { table } = aDraft()
    table['POST /changes/dunlin-47/submit'] = refusal(422, 'check-blocks', 'The check has a block. Nothing was submitted.')
    open('/changes/dunlin-47?family=knee')
    await waitFor(() => expect(screen.getByRole('button', { name: 'Submit' }).getAttribute('aria-disabled')).toBeNull())
    fireEvent.click(screen.getByRole('button', { name: 'Submit' }))
    await screen.findByText('The check has a block. Nothing was submitted.')
  })

  it('saves title and reason as they are typed', async () => {
    const { draft } = aDraft()
    open('/changes/dunlin-47?family=knee')
    const reason = await screen.findByLabelText('Reason')
    fireEvent.change(reason, { target: { value: 'The shank sinks 4 to 6 cm.' } })
    fireEvent.blur(reason)
    await waitFor(() => expect(draft.view.reason).toBe('The shank sinks 4 to 6 cm.'))
    const title = screen.getByLabelText('title of the change')
    fireEvent.change(title, { target: { value: ' ' } })
    expect(screen.getByText('A change needs a title; the one before is kept.')).toBeTruthy()
    fireEvent.change(title, { target: { value: 'Stiffer knee' } })
    fireEvent.blur(title)
    await waitFor(() => expect(draft.view.title).toBe('Stiffer knee'))
  })
})

describe('a change that may not be edited', () => {
  it('is read only and says why', async () => {
    const view = aChange({ state: 'submitted', life: 'submitted' })
    aDraft({ ...view, may: { ...view.may, edit: { allowed: false, why: 'The change is submitted.' } } })
    open('/changes/dunlin-47?view=table&family=knee')
    expect(await screen.findByText(/Read only: The change is submitted\./)).toBeTruthy()
    expect((await screen.findByRole('grid')).getAttribute('aria-readonly')).toBe('true')
    expect(screen.queryAllByRole('textbox')).toEqual([])
    expect(screen.queryByRole('button', { name: 'Submit' })).toBeNull()
  })
})

describe('the live check', () => {
  it('shows verdict and margins before and after, and the findings', async () => {
    aDraft({}, aCheck({ findings: [finding(), finding({ key: 'a', level: 'pass', text: 'The bus watchdog is on.' })] }))
    open('/changes/dunlin-47?family=knee')
    const panel = await screen.findByRole('region', { name: 'live check' })
    expect(within(panel).getAllByText('stable').length).toBeGreaterThan(0)
    expect(panel.textContent).toContain('0.99631')
    expect(panel.textContent).toContain('0.99472')
    const row = within(panel).getByRole('row', { name: /velocity phase 55\.3 .* 46\.4/ })
    expect(row).toBeTruthy()
    expect(within(panel).getByText(/At the current limit the gear bears/)).toBeTruthy()
    expect(within(panel).queryByText('The bus watchdog is on.')).toBeNull()
    fireEvent.click(within(panel).getByRole('button', { name: /show/ }))
    expect(within(panel).getByText(/The bus watchdog is on\./)).toBeTruthy()
  })

  it('is marked stale while an edit is on its way', async () => {
    aDraft()
    open('/changes/dunlin-47?family=knee')
    const panel = await screen.findByRole('region', { name: 'live check' })
    expect(panel.getAttribute('aria-busy')).toBe('false')
    await settle('Velocity gain', '5.6')
    expect(panel.getAttribute('aria-busy')).toBe('true')
    expect(within(panel).getByText('stale, checking')).toBeTruthy()
    await waitFor(() => expect(panel.getAttribute('aria-busy')).toBe('false'))
  })
})
