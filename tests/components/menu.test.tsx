// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, render, screen } from '@testing-library/react'
import { MemoryRouter } from 'react-router'
import { describe, expect, it, vi } from 'vitest'
import { Menu } from '../../src/components/ui/menu.tsx'
import { TopBar } from '../../src/components/ui/top-bar.tsx'

const signOut = vi.fn()
const show = () =>
  render(
    <MemoryRouter>
      <Menu label="machine" items={[{ label: 'All machines', to: '/machines' }, { label: 'Dunlin', to: '/machines/dunlin', current: true }, { label: 'Teasel', to: '/machines/teasel' }, { label: 'Sign out', onSelect: signOut }]}>
        Dunlin
      </Menu>
    </MemoryRouter>,
  )
const button = () => screen.getByRole('button', { name: 'machine: Dunlin' })
const focused = () => document.activeElement?.textContent

describe('a menu', () => {
  it('opens on the current item and says whether it is open', () => {
    show()
    expect(button().getAttribute('aria-expanded')).toBe('false')
    fireEvent.click(button())
    expect(button().getAttribute('aria-expanded')).toBe('true')
    expect(focused()).toBe('Dunlin')
  })

  it('moves by arrows around the ends, by Home and End, and by first letter', () => {
    show()
    fireEvent.keyDown(button(), { key: 'ArrowUp' })
    expect(focused()).toBe('Sign out')
    const key = (k: string) => fireEvent.keyDown(document.activeElement as Element, { key: k })
    key('ArrowDown')
    expect(focused()).toBe('All machines')
    key('t')
    expect(focused()).toBe('Teasel')
    key('End')
    key('ArrowUp')
    key('Home')
    expect(focused()).toBe('All machines')
  })

  it('closes on Esc and on a press outside, and Esc returns the focus', () => {
    show()
    fireEvent.click(button())
    fireEvent.keyDown(document.activeElement as Element, { key: 'Escape' })
    expect(screen.queryByRole('menu')).toBeNull()
    expect(document.activeElement).toBe(button())
    fireEvent.click(button())
    fireEvent.pointerDown(document.body)
    expect(screen.queryByRole('menu')).toBeNull()
  })

  it('acts and closes', () => {
    show()
    fireEvent.click(button())
    fireEvent.click(screen.getByRole('menuitem', { name: 'Sign out' }))
    expect(signOut).toHaveBeenCalledTimes(1)
    expect(screen.queryByRole('menu')).toBeNull()
  })
})

describe('the top bar', () => {
  const bar = (path: string) =>
    render(
      <MemoryRouter initialEntries={[path]}>
        <TopBar
          home="/"
          places={[{ to: '/', label: 'desk', end: true }, { to: '/changes', label: 'changes', waiting: 3 }, { to: '/releases', label: 'releases', also: ['/machines/dunlin/releases'] }]}
          machines={[{ label: 'Dunlin', to: '/machines/dunlin' }]}
          machine="Dunlin"
          search={(className) => <input type="search" className={className} aria-label="search" />}
          person={{ name: 'Mirela Castanho', roles: 'controls engineer' }}
          personItems={[{ label: 'Account', to: '/account' }]}
        />
        <label>
          Reason <input />
        </label>
      </MemoryRouter>,
    )

  it('marks the one place the reader is at, by aria-current and a ball', () => {
    bar('/machines/dunlin/releases/1.7.0')
    const here = screen.getAllByRole('link').filter((l) => l.getAttribute('aria-current') === 'page')
    expect(here.map((l) => l.textContent)).toEqual(['releases'])
    expect(here[0].querySelector('circle')).not.toBeNull()
  })

  it('says in words how many wait', () => {
    bar('/')
    expect(screen.getByRole('link', { name: /changes 3 waiting/ })).toBeTruthy()
  })

  it('gives the search a place of its own in each width', () => {
    bar('/')
    expect(screen.getAllByRole('searchbox', { name: 'search' }).map((e) => e.className)).toEqual(['w-[224px]', 'w-full'])
  })
})
