import { describe, expect, it } from 'vitest'
import { defaultPolicy } from '../../../shared/contract/policy.ts'
import type { BusSettings, MachineSet } from '../../../shared/parameters/machine-set.ts'
import { bitsPerRead } from '../../../shared/bus/load.ts'
import { pullUpWindow } from '../../../shared/bus/pull-up.ts'
import { busFindings } from '../../../server/modules/checks/findings/buses.ts'
import { aSet } from '../../support/a-set.ts'

const withBus = (edit: Partial<BusSettings>): MachineSet => {
  const set = aSet()
  set.buses = { port: { ...set.buses.port, ...edit } }
  set.joints = { 'knee-port': set.joints['knee-port'] }
  return set
}
const found = (kind: string, edit: Partial<BusSettings>) => busFindings(withBus(edit), defaultPolicy, () => 1).filter((f) => f.kind === kind)

describe('bus load', () => {
  // UM10204: start, repeated start and stop a bit time each; every byte nine clocks with its ACK: address+W, register, address+R, ten data bytes
  it('counts a read of ten bytes as 120 bits', () => expect(bitsPerRead(10, 1)).toBe(3 + 13 * 9))
  it.each([
    ['within', 70, 'pass'],
    ['above 70 %', 70.1, 'advise'],
    ['at 100 %', 100, 'advise'],
    ['above 100 %', 100.1, 'block'],
  ])('%s', (_what, percent, level) => expect(found('bus load', { bitRate: 120_000, bytesPerTransaction: 10, pollingRate: 10 * percent })).toMatchObject([{ level, value: expect.closeTo(percent, 6) as number }]))
  it('says nothing without a polling rate', () => expect(found('bus load', {})).toEqual([]))
})

describe('pull-up', () => {
  // TI SLVA689, example: 3.3 V, 0.4 V at 3 mA gives 966.67 Ω; 300 ns at 200 pF gives 1.77 kΩ
  it('has the window of the published example', () => {
    const window = pullUpWindow({ bitRate: 400_000, supply: 3.3, capacitance: 200e-12 })!
    expect(window.low).toBeCloseTo(966.67, 2)
    expect(window.high).toBeCloseTo(1770, -1)
  })
  it.each([
    ['inside', 1000, 'pass'],
    ['too small', 966, 'advise'],
    ['too large', 1771, 'advise'],
  ])('%s', (_what, pullUp, level) => expect(found('pull-up', { pullUp, supply: 3.3, bitRate: 400_000, capacitance: 200e-12 })).toMatchObject([{ level, value: pullUp, unit: 'Ω' }]))
  it('says when no pull-up serves', () => expect(found('pull-up', { capacitance: 600e-12 })[0].text).toContain('No pull-up serves'))
  it('judges no bus faster than Fast-mode Plus', () => expect(found('pull-up', { bitRate: 3_400_000 })).toEqual([]))
})
