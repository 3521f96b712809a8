// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, render, screen, within } from '@testing-library/react'
import { describe, expect, it, vi } from 'vitest'
import { CascadeDiagram } from '../../src/components/charts/cascade-diagram.tsx'
import { ChartFrame } from '../../src/components/charts/chart-frame.tsx'
import * as download from '../../src/components/charts/download.ts'
import { axisTicks, marginClass, placeOf } from '../../src/components/charts/map-scale.ts'
import { PolePlot } from '../../src/components/charts/pole-plot.tsx'
import { alignSeries, valueAt } from '../../src/components/charts/plot-data.ts'
import { StabilityMap } from '../../src/components/charts/stability-map.tsx'
import { ValueCell } from '../../src/components/ui/value-cell.tsx'

describe('series over one axis', () => {
  const a = { label: 'predicted', role: 'candidate' as const, x: [0, 2, 4], y: [0, 20, null] }
  const b = { label: 'measured', role: 'measured' as const, x: [1, 2, 3], y: [11, 21, 31] }

  it('keeps every point of each, a gap of its own as null, a foreign x as undefined', () => {
    expect(alignSeries([a, b])).toEqual({ x: [0, 1, 2, 3, 4], ys: [[0, undefined, 20, undefined, null], [undefined, 11, 21, 31, undefined]] })
  })
  it('takes equal axes as they are', () => expect(alignSeries([a, { ...b, x: [0, 2, 4] }]).x).toEqual([0, 2, 4]))
  it('reads the nearest point, a held value for steps, and nothing outside', () => {
    expect(valueAt(b, 1.4)).toBe(11)
    expect(valueAt(b, 1.6)).toBe(21)
    expect(valueAt({ ...b, stepped: true }, 1.9)).toBe(11)
    expect(valueAt(b, 3)).toBe(31)
    expect(valueAt(b, 3.1)).toBeNull()
    expect(valueAt({ ...b, x: [], y: [] }, 0)).toBeNull()
  })
})

describe('the numbers of a chart', () => {
  const numbers = () => ({ head: ['time, ms', 'θ "ref", rad'], rows: [[0, 0.1], [0.5, null]] })

  it('opens as a table a keyboard can scroll', () => {
    render(<ChartFrame title="Step" numbers={numbers}>picture</ChartFrame>)
    const toggle = screen.getByRole('button', { name: 'table of Step' })
    expect(screen.queryByRole('region')).toBeNull()
    fireEvent.click(toggle)
    expect(toggle.getAttribute('aria-expanded')).toBe('true')
    const region = screen.getByRole('region', { name: 'numbers of Step' })
    expect(region.tabIndex).toBe(0)
    expect(within(region).getAllByRole('row')).toHaveLength(3)
    expect(within(region).getByText('0.10000')).toBeTruthy()
  })

  it('leaves as CSV after RFC 4180 with full figures', () => {
    const save = vi.spyOn(download, 'downloadText').mockImplementation(() => {})
    render(<ChartFrame title="Step of 0.200 rad" numbers={numbers}>picture</ChartFrame>)
    fireEvent.click(screen.getByRole('button', { name: 'csv of Step of 0.200 rad' }))
    expect(save).toHaveBeenCalledExactlyOnceWith('step-of-0.200-rad.csv', '"time, ms","θ ""ref"", rad"\r\n0,0.1\r\n0.5,\r\n')
  })

  it('says how many rows it left out of a long table', () => {
    const rows = Array.from({ length: 4001 }, (_, i) => [i, i * i])
    render(<ChartFrame title="Log" numbers={() => ({ head: ['n', 'n²'], rows })}>picture</ChartFrame>)
    fireEvent.click(screen.getByRole('button', { name: 'table of Log' }))
    expect(screen.getByText(/the csv holds all rows/).textContent).toContain('4\u00a0001')
    expect(screen.getAllByRole('cell', { name: /^4\s000\.0$/ }).length).toBeGreaterThan(0)
  })
})

describe('the stability map', () => {
  // jsdom has no canvas; what is drawn on it is looked at in a browser, what is said of it is tested here.
  HTMLCanvasElement.prototype.getContext = () => null
  const stable = { verdict: 'stable' as const, phaseMarginDeg: 46.4, gainMarginDb: 8.7, withinPolicy: true }
  const x = { label: 'velocity gain', unit: 'A·s/rad', values: [1, 10, 100], log: true }
  const y = { label: 'position gain', unit: '1/s', values: [10, 20, 30] }
  const cells = [[stable, stable, { ...stable, verdict: 'unstable' as const }], [stable, null, stable], [stable, stable, { ...stable, withinPolicy: false }]]

  it('places values on both kinds of axis, and classes margins at their lower ends', () => {
    expect([placeOf(x, 1), placeOf(x, 10 ** 0.5), placeOf(y, 25)]).toEqual([0, 0.5, 1.5])
    expect(axisTicks(x)).toEqual([1, 2, 5, 10, 20, 50, 100])
    expect(axisTicks(y)).toEqual([10, 15, 20, 25, 30])
    expect([19.9, 20, 30, 45, 60, null].map(marginClass)).toEqual([1, 2, 3, 4, 5, 5])
  })

  it('is read cell by cell with the arrows from the candidate, and picked with Enter', () => {
    const pick = vi.fn()
    render(<StabilityMap x={x} y={y} cells={cells} candidate={{ x: 10, y: 10, label: 'candidate' }} onPick={pick} />)
    const map = screen.getByRole('group', { name: /Stability map/ })
    const key = (k: string) => fireEvent.keyDown(map, { key: k })
    key('ArrowRight')
    expect(screen.getByText(/velocity gain 10.0/).textContent).toContain('stable, phase margin 46.4°, gain margin 8.7 dB, within policy')
    key('ArrowRight')
    expect(screen.getByText(/: unstable$/)).toBeTruthy()
    key('ArrowLeft')
    key('ArrowUp')
    expect(screen.getByText(/not yet computed/)).toBeTruthy()
    key('Enter')
    expect(pick).toHaveBeenCalledExactlyOnceWith({ x: 10, y: 20, column: 1, row: 1 })
  })
})

it('says of the poles how many lie outside', () => {
  render(<PolePlot sets={[{ label: 'candidate', role: 'candidate', poles: [{ re: 0.6, im: 0.9 }, { re: 0.6, im: -0.9 }, { re: 0.2, im: 0 }] }]} />)
  expect(screen.getByRole('img', { name: 'candidate: 3 poles, largest modulus 1.0817, 2 outside the unit circle' })).toBeTruthy()
})

describe('the cascade', () => {
  const blocks = { position: { children: 'Kpp' }, velocity: { children: 'Kpv' }, current: { children: 'Kpc' }, driveTrain: { children: 'R' }, velocityWindow: { children: 'W' }, sensor: { children: 'offset' } }
  const shown = () => screen.getAllByRole('region').map((r) => r.getAttribute('aria-label'))

  it.each([
    ['position', ['Position', 'Velocity', 'Current', 'Drive train', 'Velocity window', 'Sensor']],
    ['velocity', ['Velocity', 'Current', 'Drive train', 'Velocity window', 'Sensor']],
    ['current', ['Current', 'Drive train', 'Sensor']],
  ] as const)('in %s mode has the blocks of its loops', (mode, names) => {
    render(<CascadeDiagram mode={mode} outerRate="2.000 kHz" currentRate="16.00 kHz" {...blocks} />)
    expect(shown()).toEqual(names)
  })

  it('writes a value by field and by ruler into the same place', () => {
    const change = vi.fn()
    render(<ValueCell title="Velocity gain" value="5.60" unit="A·s/rad" origin="family" change="+75.0" changed onChange={change} step={0.1} ruler={{ min: 0, max: 16, value: 5.6, released: 3.2, step: 0.5 }} />)
    const field = screen.getByRole('textbox', { name: 'Velocity gain' })
    fireEvent.change(field, { target: { value: '5.7' } })
    fireEvent.keyDown(field, { key: 'ArrowDown', shiftKey: true })
    fireEvent.keyDown(screen.getByRole('slider', { name: 'Velocity gain' }), { key: 'ArrowRight' })
    expect(change.mock.calls.map(([text]) => text)).toEqual(['5.7', '4.60', '6'])
  })
})
