// @vitest-environment jsdom
import { cleanup, fireEvent, render, screen } from '@testing-library/react'
import { MemoryRouter } from 'react-router'
import { afterEach, describe, expect, it } from 'vitest'
import type { BusView } from '../../shared/contract/machines.ts'
import { BusAddresses } from '../../src/features/machines/components/bus-addresses.tsx'
import { BusWhatIf } from '../../src/features/machines/components/bus-what-if.tsx'

afterEach(cleanup)

const aBus = (over: Partial<BusView> = {}): BusView => ({
  machine: 'dunlin', machineName: 'Dunlin', shown: { version: '1.0.0', sequence: 1, withdrawn: false }, key: 'fore',
  settings: { name: 'fore', bitRate: 400_000, supply: 3.3, pullUp: 1500, capacitance: 210e-12, pollingRate: 100, bytesPerTransaction: 10 },
  taps: [{ address: 0x31, joint: 'l1-yaw', name: 'L1 yaw', reserved: false }], doubled: [], reserved: [], free: 111, addressBytes: { 'l1-yaw': 1 }, claims: [], contested: [], loadPercent: { advise: 70, block: 100 }, ...over,
})
const shown = (bus = aBus()) => render(<MemoryRouter><BusAddresses bus={bus} /><BusWhatIf bus={bus} /></MemoryRouter>)
const type = (label: string, value: string) => fireEvent.change(screen.getByLabelText(label), { target: { value } })

describe('what if, on a bus', () => {
  it('says plainly that no resistor serves 400 kHz at 400 pF and 3.3 V', () => {
    shown()
    expect(screen.queryByText('No valid resistor')).toBeNull()
    type('capacitance', '400')
    expect(screen.getByText('No valid resistor')).toBeTruthy()
    fireEvent.click(screen.getByRole('button', { name: 'as released' }))
    expect(screen.queryByText('No valid resistor')).toBeNull()
  })

  it('counts more boards into the load, and marks what can not be meant', () => {
    shown()
    type('more boards', '30')
    // 31 boards of 120 bit times, a hundred times a second, of 400 000
    expect(screen.getByText('93.0 %')).toBeTruthy()
    expect(screen.getByText('high')).toBeTruthy()
    type('more boards', '1.5')
    expect(screen.getByRole('alert').textContent).toContain('a whole number up to 112')
  })

  it.each([
    ['0x31', /taken by L1 yaw/],
    ['0x44', /taken by R1 hip in dunlin-7/],
    ['0x78', /kept for 10-bit addressing.*concession/],
    ['0x20', /is free/],
    ['0x80', /no address of seven bits/],
    ['knee', /no address of seven bits/],
  ])('tells what stands at %s', (address, words) => {
    shown(aBus({ claims: [{ change: 'dunlin-7', title: 'Hip', state: 'draft', joint: 'r1-hip', name: 'R1 hip', address: 0x44 }] }))
    type('an address', address)
    expect(screen.getByRole('status').textContent).toMatch(words)
  })

  it('points out an address that two open changes want', () => {
    const claim = (change: string, joint: string) => ({ change, title: change, state: 'draft' as const, joint, name: joint, address: 0x44 })
    const claims = [claim('dunlin-7', 'r1-hip'), claim('dunlin-8', 'l1-hip')]
    shown(aBus({ claims, contested: [{ address: 0x44, claims, holder: null }] }))
    expect(screen.getByRole('alert').textContent).toMatch(/0x44 would be doubled.*dunlin-7 puts r1-hip there, dunlin-8 puts l1-hip there/)
    expect(screen.getByText(/Free to take:/).textContent).not.toContain('0x44')
  })
})
