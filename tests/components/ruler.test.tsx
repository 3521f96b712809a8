// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, render, screen } from '@testing-library/react'
import fc from 'fast-check'
import { useState } from 'react'
import { describe, expect, it, vi } from 'vitest'
import { EffectRuler } from '../../src/components/ui/effect-ruler.tsx'
import { Ruler } from '../../src/components/ui/ruler.tsx'
import type { RulerProps } from '../../src/components/ui/ruler.tsx'
import { rulerScale, rulerTicks, stepValue } from '../../src/components/ui/ruler-scale.ts'

function Held(props: Omit<RulerProps, 'value' | 'label'> & { start: number }) {
  const [value, setValue] = useState(props.start)
  return <Ruler {...props} label="Velocity gain" value={value} onChange={setValue} />
}

describe('a ruler as slider', () => {
  it('is reached by Tab and says value, unit, released value and where it goes unstable', () => {
    render(<Held start={5.6} min={0.05} max={16} released={3.2} unit="A·s/rad" scale="log" unstable={[{ from: 12, to: 16 }]} />)
    const slider = screen.getByRole('slider', { name: 'Velocity gain' })
    expect(slider.tabIndex).toBe(0)
    expect(slider.getAttribute('aria-valuenow')).toBe('5.6')
    expect(slider.getAttribute('aria-valuetext')).toBe('5.60 A·s/rad, released 3.20 A·s/rad, unstable 12.0 to 16.0')
  })

  it('steps by arrows, ten steps with Shift or Page, to the bounds with Home and End', () => {
    render(<Held start={4} min={0} max={10} released={null} />)
    const slider = screen.getByRole('slider')
    const at = () => Number(slider.getAttribute('aria-valuenow'))
    fireEvent.keyDown(slider, { key: 'ArrowRight' })
    expect(at()).toBe(4.1)
    fireEvent.keyDown(slider, { key: 'ArrowDown' })
    expect(at()).toBe(4)
    fireEvent.keyDown(slider, { key: 'PageUp' })
    expect(at()).toBe(5)
    fireEvent.keyDown(slider, { key: 'ArrowLeft', shiftKey: true })
    expect(at()).toBe(4)
    fireEvent.keyDown(slider, { key: 'End' })
    expect(at()).toBe(10)
    fireEvent.keyDown(slider, { key: 'ArrowRight' })
    expect(at()).toBe(10)
    fireEvent.keyDown(slider, { key: 'Home' })
    expect(at()).toBe(0)
  })

  it('rests in the notch when a step would cross it, and says "unchanged" there', () => {
    render(<Held start={3.95} min={0} max={10} released={4.02} />)
    const slider = screen.getByRole('slider')
    fireEvent.keyDown(slider, { key: 'ArrowRight' })
    expect(slider.getAttribute('aria-valuenow')).toBe('4.02')
    expect(slider.getAttribute('aria-valuetext')).toBe('4.02, unchanged')
    fireEvent.keyDown(slider, { key: 'ArrowRight' })
    expect(Number(slider.getAttribute('aria-valuenow'))).toBeGreaterThan(4.02)
  })

  it('tells of each rest once', () => {
    const settled = vi.fn()
    render(<Held start={1} min={0} max={10} step={1} onSettle={settled} />)
    fireEvent.keyDown(screen.getByRole('slider'), { key: 'ArrowRight' })
    expect(settled.mock.calls).toEqual([[2]])
  })

  it('leaves other keys to the page', () => {
    render(<Held start={1} min={0} max={10} />)
    expect(fireEvent.keyDown(screen.getByRole('slider'), { key: 'Tab' })).toBe(true)
  })
})

describe('a ruler to read', () => {
  it('is a picture with words: unstable here, policy missed', () => {
    render(<Ruler label="Current gain" min={0} max={10} value={9} released={4} unstable={[{ from: 8, to: 10 }]} />)
    expect(screen.getByRole('img').getAttribute('aria-label')).toContain('unstable here')
    render(<EffectRuler label="gain margin" min={0} max={24} before={9.1} after={6.52} unit="dB" policy={{ limit: 7, forbidden: 'below' }} />)
    expect(screen.getByRole('img', { name: /gain margin/ }).getAttribute('aria-label')).toBe('gain margin: 6.52 dB, released 9.10 dB, policy asks at least 7.00 dB, missed, from 0 to 24.0')
  })

  it('seats the ball in ink in its notch and lifts it out in brass', () => {
    const { container, rerender } = render(<Ruler label="a" min={0} max={10} value={4} released={4} />)
    expect(container.querySelector('circle')?.getAttribute('fill')).toBe('var(--ink)')
    rerender(<Ruler label="a" min={0} max={10} value={5} released={4} />)
    expect(container.querySelector('circle')?.getAttribute('fill')).toBe('var(--brass)')
  })
})

describe('the scale', () => {
  const bounds = fc.tuple(fc.double({ min: 1e-3, max: 10, noNaN: true }), fc.double({ min: 11, max: 1e4, noNaN: true }))

  it('takes a share back to the value it came from, on either kind', () => {
    fc.assert(
      fc.property(bounds, fc.double({ min: 0, max: 1, noNaN: true }), fc.constantFrom('linear' as const, 'log' as const), ([min, max], share, kind) => {
        const scale = rulerScale(min, max, kind)
        expect(scale.share(scale.at(share))).toBeCloseTo(share, 9)
      }),
    )
  })

  it('never steps out of its bounds, and always moves on the way asked until it meets one', () => {
    fc.assert(
      fc.property(bounds, fc.double({ min: 0, max: 1, noNaN: true }), fc.integer({ min: 1, max: 10 }), fc.constantFrom('linear' as const, 'log' as const), ([min, max], share, steps, kind) => {
        const scale = rulerScale(min, max, kind)
        const value = scale.at(share)
        const up = stepValue(scale, value, steps, null)
        const down = stepValue(scale, value, -steps, null)
        expect(up).toBeLessThanOrEqual(max)
        expect(down).toBeGreaterThanOrEqual(min)
        expect(up > value || up === max).toBe(true)
        expect(down < value || down === min).toBe(true)
      }),
    )
  })

  it('is linear when a log scale has no positive lower bound', () => expect(rulerScale(0, 10, 'log').kind).toBe('linear'))
  it('marks the decades', () => expect(rulerTicks(rulerScale(0.05, 16, 'log')).filter((t) => t.major).map((t) => t.value)).toEqual([0.1, 1, 10]))
})
