// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import { DriveTrain } from '../../shared/parameters/machine-set.ts'
import { driveTrainGroups } from '../../src/features/machines/drive-train-parts.ts'
import { aBus, aFamily, aJointView, aMachine } from './a-machine.ts'
import { aMe, anEngineer, fakeServer, problem } from './fake-server.ts'
import { openApp } from './open-app.tsx'

const frame = { 'GET /me': anEngineer, 'GET /machines': [aMachine()], 'GET /machines/dunlin': aMachine() }
const press = (name: string | RegExp) => fireEvent.click(screen.getByRole('button', { name }))

describe('the list of machines', () => {
  it('hides retired ones until they are asked for', async () => {
    fakeServer({ ...frame, 'GET /machines': [aMachine(), aMachine({ key: 'godwit', name: 'Godwit', retired: true })] })
    openApp('/machines')
    const table = await screen.findByRole('table', { name: 'machines' })
    expect(within(table).queryByText('Godwit')).toBeNull()
    fireEvent.click(screen.getByLabelText('show retired machines (1)'))
    expect(await within(table).findByText('Godwit')).toBeTruthy()
    expect(screen.queryByRole('button', { name: 'New machine' })).toBeNull()
  })

  it('takes a new one from an administrator; its key follows the name until it is written', async () => {
    const server = fakeServer({ ...frame, 'GET /me': aMe(), 'GET /machines': [], 'POST /machines': aMachine({ key: 'godwit', name: 'Gödwit Mk II' }), 'GET /machines/godwit': aMachine({ key: 'godwit', name: 'Gödwit Mk II', busList: [], jointList: [], familyList: [], changes: [], currentRelease: null, shown: null }) })
    const app = openApp('/machines')
    fireEvent.click(await screen.findByRole('button', { name: 'New machine' }))
    fireEvent.change(screen.getByLabelText('Name'), { target: { value: 'Gödwit Mk II' } })
    expect(screen.getByLabelText<HTMLInputElement>('Key').value).toBe('go-dwit-mk-ii')
    fireEvent.change(screen.getByLabelText('Key'), { target: { value: 'godwit' } })
    press('Make the machine')
    expect(await screen.findByText('Nothing is released yet.')).toBeTruthy()
    expect(app.here()).toBe('/machines/godwit')
    expect(server.acts()[0].body).toEqual({ name: 'Gödwit Mk II', key: 'godwit', description: '' })
  })
})

describe('a machine', () => {
  it('shows its release, its bus with a tap for each joint, and what waits', async () => {
    fakeServer(frame)
    openApp('/machines/dunlin')
    expect(await screen.findByRole('heading', { name: 'Dunlin' })).toBeTruthy()
    const spine = screen.getByRole('navigation', { name: 'bus fore' })
    expect(within(spine).getByRole('link', { name: /^L1 knee, 0x33/ }).getAttribute('href')).toBe('/machines/dunlin/joints/l1-knee')
    expect(within(spine).getByRole('link', { name: /^L1 knee/ }).getAttribute('aria-label')).toContain('a change waits')
    expect(screen.getByRole('link', { name: '1.7.0' }).getAttribute('href')).toBe('/machines/dunlin/releases/1.7.0')
    expect(screen.getByText('signature void')).toBeTruthy()
    expect(screen.getByRole('link', { name: 'Stiffer hip on landing' })).toBeTruthy()
  })

  it('narrows and sorts its joints by the address', async () => {
    fakeServer(frame)
    openApp('/machines/dunlin?filter=0x3b&sort=-joint')
    const table = await screen.findByRole('table', { name: 'joints' })
    expect(within(table).getAllByRole('link').map((a) => a.textContent)).toEqual(['R1 knee'])
    fireEvent.change(screen.getByLabelText('filter joints'), { target: { value: '' } })
    expect(within(table).getAllByRole('link').map((a) => a.textContent)).toEqual(['R1 knee', 'L1 knee'])
  })

  it('names two that share an address', async () => {
    fakeServer({ ...frame, 'GET /machines/dunlin': aMachine({ busList: [{ ...aMachine().busList[0], doubled: [0x33] }], jointList: aMachine().jointList.map((j) => ({ ...j, address: 0x33 })) }) })
    openApp('/machines/dunlin')
    expect(await screen.findByText(/L1 knee and R1 knee can't be told apart there/)).toBeTruthy()
  })

  it('without a current release says which withdrawn one it shows', async () => {
    fakeServer({ ...frame, 'GET /machines/dunlin': aMachine({ currentRelease: null, currentVersion: null, shown: { version: '1.6.2', sequence: 6, withdrawn: true } }) })
    openApp('/machines/dunlin')
    expect(await screen.findByText('none')).toBeTruthy()
    expect(screen.getByText('withdrawn')).toBeTruthy()
  })

  it('takes a draft with a title, and goes to it', async () => {
    const server = fakeServer({ ...frame, 'POST /changes': { key: 'dunlin-53' } })
    const app = openApp('/machines/dunlin')
    fireEvent.click(await screen.findByRole('button', { name: 'Draft a change…' }))
    expect(screen.getByText(/It starts from release/).textContent).toContain('1.7.0')
    press('Draft it')
    expect(server.acts()).toEqual([])
    fireEvent.change(screen.getByLabelText('Title'), { target: { value: '  Softer wrist ' } })
    press('Draft it')
    await waitFor(() => expect(app.here()).toBe('/changes/dunlin-53'))
    expect(server.acts()[0]).toMatchObject({ path: '/changes', body: { machine: 'dunlin', title: 'Softer wrist' } })
  })

  it('tells whoever may not draft why', async () => {
    fakeServer({ ...frame, 'GET /machines/dunlin': aMachine({ may: { ...aMachine().may, draftChange: { allowed: false, why: 'This takes the role controls engineer on dunlin.' } } }) })
    openApp('/machines/dunlin')
    const button = await screen.findByRole('button', { name: 'Draft a change…' })
    expect(button.getAttribute('aria-description')).toBe('This takes the role controls engineer on dunlin.')
    fireEvent.click(button)
    expect(screen.queryByRole('dialog')).toBeNull()
  })

  it('is retired by its name, and what stands against it is told', async () => {
    const server = fakeServer({ ...frame, 'GET /me': aMe(), 'POST /machines/dunlin/retire': problem(409, 'in-use', 'Dunlin has an unreleased change: dunlin-50.') })
    openApp('/machines/dunlin')
    fireEvent.click(await screen.findByRole('button', { name: 'Retire…' }))
    press('Retire')
    expect(server.acts()).toEqual([])
    fireEvent.change(screen.getByLabelText('Write the name of the machine'), { target: { value: 'Dunlin' } })
    press('Retire')
    expect(await screen.findByText('Dunlin has an unreleased change: dunlin-50.')).toBeTruthy()
    expect(server.acts()[0].body).toEqual({ name: 'Dunlin' })
  })
})

describe('a joint', () => {
  const replies = { ...frame, 'GET /machines/dunlin/joints/l1-knee': aJointView() }

  it('shows each value with where it comes from, what it stands over, and its register', async () => {
    fakeServer(replies)
    openApp('/machines/dunlin/joints/l1-knee')
    const table = await screen.findByRole('table', { name: 'values' })
    const gain = within(table).getByRole('row', { name: /Velocity gain/ }).textContent
    expect(gain).toContain('2.9A·s/rad')
    expect(gain).toContain('over family 3.2')
    expect(gain).toContain('0x24 q7.24')
    expect(gain).toContain('66 66 E6 02')
    expect(gain).toMatch(/\+0\.0082\sppm/)
    const address = within(table).getByRole('row', { name: /Bus address/ }).textContent
    expect(address).toContain('0x33')
    expect(address).not.toContain('over')
    expect(within(table).getByRole('row', { name: /Supply compensation/ }).textContent).toContain('u8 bit 2')
  })

  it('narrows to its own values, in the address too', async () => {
    fakeServer(replies)
    const app = openApp('/machines/dunlin/joints/l1-knee')
    const table = await screen.findByRole('table', { name: 'values' })
    fireEvent.click(screen.getByLabelText("only the joint's own"))
    expect(within(table).queryByText('Supply compensation')).toBeNull()
    expect(within(table).getByText('Velocity gain')).toBeTruthy()
    await waitFor(() => expect(app.here()).toContain('own=yes'))
  })

  it('has its bus as navigation, its own tap marked', async () => {
    fakeServer(replies)
    openApp('/machines/dunlin/joints/l1-knee')
    await screen.findByRole('table', { name: 'values' })
    const taps = screen.getAllByRole('link', { name: /^L1 knee, 0x33/ })
    expect(taps.length).toBeGreaterThan(0)
    expect(taps.every((t) => t.getAttribute('aria-current') === 'page')).toBe(true)
  })
})

describe('a family', () => {
  it('shows what it gives, who departs, and what its drive trains altered', async () => {
    fakeServer({ ...frame, 'GET /machines/dunlin/families/knee': aFamily() })
    openApp('/machines/dunlin/families/knee')
    const table = await screen.findByRole('table', { name: 'values' })
    const row = within(table).getByRole('row', { name: /Velocity gain/ })
    expect(within(row).getByRole('link', { name: 'R1 knee' }).getAttribute('href')).toBe('/machines/dunlin/joints/r1-knee')
    expect(row.textContent).toContain('2.9')
    expect(screen.getByText(/altered eta/)).toBeTruthy()
  })
})

describe('a bus', () => {
  it('draws all 128 addresses: reserved, free, taken, and taken twice', async () => {
    fakeServer({ ...frame, 'GET /machines/dunlin/buses/fore': aBus() })
    openApp('/machines/dunlin/bus/fore')
    const grid = await screen.findByRole('table', { name: 'addresses of the bus' })
    expect(within(grid).getAllByRole('cell')).toHaveLength(128)
    expect(within(grid).getAllByText('reserved')).toHaveLength(16)
    expect(within(grid).getByRole('link', { name: 'L1 knee, 0x33, shares its address' })).toBeTruthy()
    const answers = screen.getByRole('table', { name: 'what answers' })
    expect(within(answers).getAllByText('two at this address')).toHaveLength(2)
    expect(within(answers).getAllByText('alone at its address')).toHaveLength(1)
  })
})

describe('the drive train as it is shown', () => {
  it('has every member of the document once', () => {
    const shown = driveTrainGroups.flatMap((g) => g.parts.map((p) => p.letter))
    expect(shown.toSorted()).toEqual(Object.keys(DriveTrain.properties).toSorted())
  })
})
