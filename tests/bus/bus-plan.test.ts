import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { ADDRESSES, keptFor, proposeAddresses, reserved, reservedRanges } from '../../shared/bus/addresses.ts'
import { bitsPerRead, busLoad } from '../../shared/bus/load.ts'
import { pullUpWindow } from '../../shared/bus/pull-up.ts'
import { claimsOn, contestedOn } from '../../server/modules/machines/bus-claims.ts'
import { aSet } from '../support/a-set.ts'

describe('the pull-up window', () => {
  // TI SLVA689, example: V_DD 3.3 V, V_OL 0.4 V at 3 mA: 966.67 Ω; Fast-mode's 300 ns at 200 pF: 1.77 kΩ
  it('is that of the published example', () => {
    const window = pullUpWindow({ bitRate: 400_000, supply: 3.3, capacitance: 200e-12 })!
    expect(window.low).toBeCloseTo(966.67, 2)
    expect(window.high).toBeCloseTo(1770, -1)
    expect(window.mode).toBe('Fast-mode')
  })

  // UM10204 §7.1: t_r/(0.8473·C_b) with Fast-mode's 300 ns and its largest 400 pF is 885 Ω, below the 966.67 Ω that 3 mA drivers need at 3.3 V
  it('holds no resistor at 400 kHz, 400 pF and 3.3 V', () => {
    const window = pullUpWindow({ bitRate: 400_000, supply: 3.3, capacitance: 400e-12 })!
    expect(window.high).toBeCloseTo(885.2, 1)
    expect(window.low).toBeGreaterThan(window.high)
    expect(window.mostCapacitance).toBe(400e-12)
    // 300 ns/(0.8473·966.67 Ω)
    expect(window.capacitanceForLow).toBeCloseTo(366.3e-12, 13)
  })

  it('follows the mode by its rate: rise time and sink current of each (UM10204, electrical characteristics)', () => {
    const at = (bitRate: number) => pullUpWindow({ bitRate, supply: 5, capacitance: 100e-12 })
    expect(at(100_000)).toMatchObject({ mode: 'Standard-mode', low: expect.closeTo(1533.3, 1) as number, high: expect.closeTo(11_802, 0) as number })
    expect(at(1_000_000)).toMatchObject({ mode: 'Fast-mode Plus', low: expect.closeTo(230, 6) as number, high: expect.closeTo(1416.3, 1) as number, mostCapacitance: 550e-12 })
    expect(at(1_000_001)).toBeNull()
  })

  it('takes a fifth of the supply as the low level up to 2 V', () => {
    expect(pullUpWindow({ bitRate: 100_000, supply: 1.8, capacitance: 100e-12 })!.low).toBeCloseTo((0.8 * 1.8) / 0.003, 6)
  })
})

describe('the bus load', () => {
  // UM10204 §3.1: every byte is eight bits and an acknowledge. Address, register, address again and four data bytes: 63 clocks, and start, repeated start, stop
  it('counts 66 bit times for a read of four bytes', () => expect(bitsPerRead(4, 1)).toBe(66))

  it('adds up over the boards, and says the fastest polling there is', () => {
    const load = busLoad({ bitRate: 400_000, pollingRate: 500, bytesPerTransaction: 4, addressBytes: [1, 1, 2] })
    expect(load.bitsPerRound).toBe(66 + 66 + 75)
    expect(load.share).toBeCloseTo((207 * 500) / 400_000, 12)
    expect(load.fastestPolling * load.secondsPerRound).toBeCloseTo(1, 12)
  })
})

describe('addresses', () => {
  // UM10204, table of reserved addresses: 0000 XXX and 1111 XXX
  it('reserves sixteen of 128', () => {
    expect(ADDRESSES.filter(reserved)).toEqual([0, 1, 2, 3, 4, 5, 6, 7, 0x78, 0x79, 0x7a, 0x7b, 0x7c, 0x7d, 0x7e, 0x7f])
    for (const { from, to } of reservedRanges) for (let a = from; a <= to; a++) expect(reserved(a)).toBe(true)
    expect(keptFor(0x00)).toContain('general call')
    expect(keptFor(0x78)).toBe('10-bit addressing')
    expect(keptFor(0x05)).toContain('Hs-mode')
  })

  it('proposes free ones alone, none a single bit beside a taken one while others are free', () => {
    expect(proposeAddresses([0x20, 0x21, 0x22], 3)).toEqual([0x08, 0x09, 0x0a])
    fc.assert(
      fc.property(fc.uniqueArray(fc.integer({ min: 0, max: 127 }), { maxLength: 127 }), (taken) => {
        const proposed = proposeAddresses(taken, 6)
        return proposed.every((a) => !reserved(a) && !taken.includes(a)) && new Set(proposed).size === proposed.length && proposed.length === Math.min(6, ADDRESSES.filter((a) => !reserved(a) && !taken.includes(a)).length)
      }),
    )
  })
})

describe('addresses that open changes claim', () => {
  const released = aSet()
  const moving = (change: string, joint: string, address: number, also: (set: ReturnType<typeof aSet>) => void = () => {}) => {
    const set = aSet()
    set.joints[joint].address = address
    also(set)
    return { change, title: change, state: 'draft' as const, set }
  }
  const contested = (...open: ReturnType<typeof moving>[]) => contestedOn('port', released, open, claimsOn('port', released, open))

  it('are those that the release does not have', () => {
    expect(claimsOn('port', released, [moving('dunlin-2', 'knee-port', 0x30)])).toMatchObject([{ change: 'dunlin-2', joint: 'knee-port', address: 0x30 }])
    expect(claimsOn('starboard', released, [moving('dunlin-2', 'knee-port', 0x30)])).toEqual([])
    const arriving = moving('dunlin-3', 'knee-starboard', 0x44, (set) => (set.joints['knee-starboard'].bus = 'port'))
    expect(claimsOn('port', released, [arriving])).toMatchObject([{ joint: 'knee-starboard', address: 0x44 }])
  })

  it('are contested where two changes give one address to different joints', () => {
    expect(contested(moving('dunlin-2', 'knee-port', 0x30), moving('dunlin-3', 'hip-port', 0x30))).toMatchObject([{ address: 0x30, holder: null, claims: [{ change: 'dunlin-2' }, { change: 'dunlin-3' }] }])
    expect(contested(moving('dunlin-2', 'knee-port', 0x30), moving('dunlin-3', 'knee-port', 0x30))).toEqual([])
  })

  it('are contested where the release has a joint that stays, or another device', () => {
    expect(contested(moving('dunlin-2', 'knee-port', 0x21))).toMatchObject([{ address: 0x21, holder: 'Hip port' }])
    expect(contested(moving('dunlin-2', 'knee-port', 0x21, (set) => (set.joints['hip-port'].address = 0x22)))).toEqual([])
    expect(contested(moving('dunlin-2', 'knee-port', 0x68))).toMatchObject([{ holder: 'Tilt sensor' }])
  })
})
