// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, render, screen, waitFor, within } from '@testing-library/react'
import { MemoryRouter, Route, Routes } from 'react-router'
import { describe, expect, it, vi } from 'vitest'
import { Table } from '../../src/components/ui/table.tsx'
import type { Column } from '../../src/components/ui/table.tsx'

interface Joint {
  name: string
  gain: number | null
}

const JOINTS: Joint[] = [
  { name: 'L1 knee', gain: 3.2 },
  { name: 'winch', gain: null },
  { name: 'R3 knee', gain: 16.25 },
  { name: 'L10 hip', gain: 5 },
]

const COLUMNS: Column<Joint>[] = [
  { key: 'name', head: 'Joint', cell: (j) => j.name, sortBy: (j) => j.name },
  { key: 'gain', head: 'Gain', unit: 'A·s/rad', decimal: (j) => (j.gain === null ? null : String(j.gain)), sortBy: (j) => j.gain },
]

function linked() {
  return render(
    <MemoryRouter>
      <Routes>
        <Route path="/" element={<Table label="joints" rows={JOINTS} columns={COLUMNS} rowKey={(j) => j.name} rowTo={(j) => `/joints/${encodeURIComponent(j.name)}`} />} />
        <Route path="/joints/:name" element={<p>the joint</p>} />
      </Routes>
    </MemoryRouter>,
  )
}

const names = () => screen.getAllByRole('row').slice(1).map((r) => within(r).getAllByRole('cell')[0].textContent)

describe('moving by keyboard', () => {
  it('has one row in the tab order and moves with arrows, Home and End', () => {
    linked()
    const links = screen.getAllByRole('link')
    expect(links.map((l) => l.tabIndex)).toEqual([0, -1, -1, -1])
    links[0].focus()
    fireEvent.keyDown(links[0], { key: 'ArrowDown' })
    expect(document.activeElement).toBe(links[1])
    expect(links.map((l) => l.tabIndex)).toEqual([-1, 0, -1, -1])
    fireEvent.keyDown(links[1], { key: 'End' })
    expect(document.activeElement).toBe(links[3])
    fireEvent.keyDown(links[3], { key: 'ArrowDown' })
    expect(document.activeElement).toBe(links[3])
    fireEvent.keyDown(links[3], { key: 'Home' })
    fireEvent.keyDown(links[0], { key: 'ArrowUp' })
    expect(document.activeElement).toBe(links[0])
  })

  it('lets a row without a link take the focus itself', () => {
    render(<Table label="joints" rows={JOINTS} columns={COLUMNS} rowKey={(j) => j.name} />)
    const rows = screen.getAllByRole('row').slice(1)
    rows[0].focus()
    fireEvent.keyDown(rows[0], { key: 'ArrowDown' })
    expect(document.activeElement).toBe(rows[1])
  })

  it('opens a row by its link, by its button, or by a press anywhere in it', () => {
    linked()
    fireEvent.click(screen.getAllByRole('cell')[1])
    expect(screen.getByText('the joint')).toBeTruthy()
    const open = vi.fn()
    render(<Table label="joints" rows={JOINTS} columns={COLUMNS} rowKey={(j) => j.name} onOpen={open} />)
    fireEvent.click(screen.getByRole('button', { name: 'winch' }))
    expect(open).toHaveBeenCalledExactlyOnceWith(JOINTS[1])
  })
})

describe('sorting', () => {
  it('goes up, down and back to how it came, says so, and puts the missing last', () => {
    render(<Table label="joints" rows={JOINTS} columns={COLUMNS} rowKey={(j) => j.name} />)
    const head = screen.getByRole('columnheader', { name: /Gain/ })
    const press = () => fireEvent.click(within(head).getByRole('button'))
    press()
    expect(head.getAttribute('aria-sort')).toBe('ascending')
    expect(names()).toEqual(['L1 knee', 'L10 hip', 'R3 knee', 'winch'])
    press()
    expect(head.getAttribute('aria-sort')).toBe('descending')
    expect(names()).toEqual(['R3 knee', 'L10 hip', 'L1 knee', 'winch'])
    press()
    expect(head.getAttribute('aria-sort')).toBeNull()
    expect(names()).toEqual(JOINTS.map((j) => j.name))
  })

  it('can be led from outside', () => {
    const onSort = vi.fn()
    render(<Table label="joints" rows={JOINTS} columns={COLUMNS} rowKey={(j) => j.name} sort={{ key: 'name', descending: true }} onSort={onSort} />)
    expect(names()).toEqual(['winch', 'R3 knee', 'L10 hip', 'L1 knee'])
    fireEvent.click(screen.getByRole('button', { name: 'Joint' }))
    expect(onSort).toHaveBeenCalledExactlyOnceWith(null)
  })
})

it('sets numbers on their decimal point and reads a missing one as none', () => {
  render(<Table label="joints" rows={JOINTS} columns={COLUMNS} rowKey={(j) => j.name} />)
  expect(screen.getByText('16.25').style.paddingRight).toBe('0ch')
  expect(screen.getByText('3.2').style.paddingRight).toBe('1ch')
  expect(screen.getByText('5').style.paddingRight).toBe('3ch')
  expect(screen.getByText('none')).toBeTruthy()
})

it('says what to do when there are no rows', () => {
  render(<Table label="joints" rows={[]} columns={COLUMNS} rowKey={(j: Joint) => j.name} empty="No joints yet. Add one to a bus." />)
  expect(screen.getByText('No joints yet. Add one to a bus.')).toBeTruthy()
})

describe('a long table', () => {
  const many: Joint[] = Array.from({ length: 2000 }, (_, i) => ({ name: `joint ${i + 1}`, gain: i }))
  const show = () => render(<Table label="joints" rows={many} columns={COLUMNS} rowKey={(j) => j.name} />)

  it('keeps the rows near the window in the page, and tells of all', async () => {
    show()
    await waitFor(() => expect(document.querySelector('.table-gap')).not.toBeNull(), { timeout: 15_000 })
    const table = screen.getByRole('table', { name: 'joints' })
    expect(table.getAttribute('aria-rowcount')).toBe('2001')
    const rows = within(table).getAllByRole('row').filter((r) => r.hasAttribute('aria-rowindex'))
    expect(rows.length).toBeGreaterThan(10)
    expect(rows.length).toBeLessThan(120)
    expect([rows[0].getAttribute('aria-rowindex'), rows[0].textContent]).toEqual(['2', 'joint 10'])
    // the room of the others is kept, so that the page is as long as the table
    const gap = table.querySelector<HTMLElement>('.table-gap td')!
    expect(Number.parseFloat(gap.style.height)).toBe((2000 - rows.length) * 33)
  })

  it('sorts all rows, not only those in the page', async () => {
    show()
    await waitFor(() => expect(document.querySelector('.table-gap')).not.toBeNull(), { timeout: 15_000 })
    fireEvent.click(screen.getByRole('button', { name: /Gain/ }))
    fireEvent.click(screen.getByRole('button', { name: /Gain/ }))
    expect(screen.getAllByRole('row').find((r) => r.getAttribute('aria-rowindex') === '2')!.textContent).toContain('joint 2000')
  })
})
