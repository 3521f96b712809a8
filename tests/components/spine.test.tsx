// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, render, screen } from '@testing-library/react'
import fc from 'fast-check'
import { MemoryRouter } from 'react-router'
import { describe, expect, it } from 'vitest'
import { BusSpine } from '../../src/components/ui/bus-spine.tsx'
import { spineRows } from '../../src/components/ui/spine-rows.ts'
import type { SpineTap } from '../../src/components/ui/spine-rows.ts'

const tap = (joint: string, address: number, rest: Partial<SpineTap> = {}): SpineTap => ({ key: joint, to: `/joints/${joint}`, joint, address, board: 'current', ...rest })

describe('rows of the spine', () => {
  it('puts taps in address order with the free stretches between', () => {
    const rows = spineRows([tap('knee', 0x33), tap('yaw', 0x31), tap('winch', 0x40)])
    expect(rows.map((r) => (r.kind === 'free' ? r.count : r.address))).toEqual([41, 0x31, 1, 0x33, 12, 0x40, 55])
  })

  it('accounts for each of the 112 addresses exactly once, whatever is taken', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0x08, max: 0x77 }), { maxLength: 30 }), (addresses) => {
        const rows = spineRows(addresses.map((a, i) => tap(`j${i}`, a)))
        expect(rows.reduce((n, r) => n + (r.kind === 'free' ? r.count : 1), 0)).toBe(0x77 - 0x08 + 1)
      }),
    )
  })

  it('keeps a tap at a reserved address in sight', () => {
    const rows = spineRows([tap('odd', 0x03), tap('high', 0x7a)])
    expect(rows.filter((r) => r.kind === 'taps')).toHaveLength(2)
    expect(rows.filter((r) => r.kind === 'free').map((r) => r.count)).toEqual([112])
  })
})

describe('the spine as navigation', () => {
  it('links each tap, in words, and moves by arrows', () => {
    render(
      <MemoryRouter>
        <BusSpine name="mid" bitRate={400_000} supply={3.3} pullUp={1500} selected="L2 knee" taps={[tap('L2 knee', 0x33, { waiting: true }), tap('L2 hip', 0x32), tap('R2 hip', 0x32, { board: 'read-back differs' }), tap('R2 yaw', 0x39, { board: 'silent' })]} />
      </MemoryRouter>,
    )
    const links = screen.getAllByRole('link')
    expect(links.map((l) => l.getAttribute('aria-label'))).toEqual([
      'L2 hip, 0x32, board current, 2 boards at one address',
      'R2 hip, 0x32, board read-back differs, 2 boards at one address',
      'L2 knee, 0x33, board current, a change waits',
      'R2 yaw, 0x39, board silent',
    ])
    expect(links[2].getAttribute('aria-current')).toBe('page')
    links[0].focus()
    fireEvent.keyDown(links[0], { key: 'ArrowDown' })
    expect(document.activeElement).toBe(links[1])
    fireEvent.keyDown(links[1], { key: 'End' })
    expect(document.activeElement).toBe(links[3])
    expect(screen.getByRole('img', { name: '42 addresses free' })).toBeTruthy()
  })
})
