import type { ReactNode } from 'react'
import { Link, useLocation } from 'react-router'
import { Chevron } from './chevron.tsx'
import { Mark } from './mark.tsx'
import { Menu } from './menu.tsx'
import type { MenuItem } from './menu.tsx'
import { PlaceBall } from './place-ball.tsx'

export interface Place {
  to: string
  label: string
  /** Only this very path counts as being there. */
  end?: boolean
  /** Further paths that belong to this place, as prefixes. */
  also?: readonly string[]
  /** How many things wait there. */
  waiting?: number
}

export interface TopBarProps {
  /** Where the mark leads. */
  home: string
  places: readonly Place[]
  machines: readonly MenuItem[]
  /** Name of the machine shown; without it "All machines". */
  machine?: string
  /** The search field, once for each of the two places it stands in by width. */
  search: (className: string) => ReactNode
  person?: { name: string; roles: string }
  personItems: readonly MenuItem[]
}

/** The slim bar above every page. Below 1024 px the places fold into a menu and the search takes a line of its own. */
export function TopBar({ home, places, machines, machine, search, person, personItems }: TopBarProps) {
  const { pathname } = useLocation()
  const here = places.find((p) => isHere(p, pathname))
  return (
    <header className="bar">
      <a href="#content" className="sr-only focus:not-sr-only focus:absolute focus:left-2 focus:top-2 focus:z-30 focus:bg-sheet focus:p-2">
        to the content
      </a>
      <div className="wrap bar-row">
        <Link to={home} className="flex items-center gap-2 text-16 font-semibold tracking-[.1px] text-ink no-underline" aria-label="Detent, to the desk">
          <Mark />
          <span className="max-[419px]:sr-only">Detent</span>
        </Link>
        <Menu label="machine" items={machines}>
          <span className="max-w-[9rem] truncate max-[359px]:max-w-[4rem]">{machine ?? 'All machines'}</span>
          <Chevron />
        </Menu>
        <nav aria-label="main" className="bar-nav">
          {places.map((place) => (
            <Link key={place.to} to={place.to} aria-current={place === here ? 'page' : undefined}>
              {place.label}
              {place.waiting ? <WaitingCount n={place.waiting} /> : null}
              {place === here && <PlaceBall />}
            </Link>
          ))}
        </nav>
        <div className="bar-narrow">
          <Menu
            label="place"
            buttonClass="switch border-transparent bg-transparent"
            items={places.map((p) => ({ label: p.label, to: p.to, current: p === here, note: p.waiting ? <WaitingCount n={p.waiting} /> : undefined }))}
          >
            {here && <Seat />}
            {here?.label ?? 'go to'}
            <Chevron />
          </Menu>
        </div>
        <span className="flex-1" />
        <div className="bar-wide">
          {search('w-[224px]')}
        </div>
        {person && (
          <Menu label="person" align="end" buttonClass="border-0 bg-transparent p-0 text-right text-13 leading-4" items={personItems}>
            <span className="max-sm:hidden">
              {person.name}
              <span className="block text-12 leading-4 text-ink-2">{person.roles}</span>
            </span>
            <span className="grid size-[30px] place-items-center rounded-full border border-rule font-medium sm:hidden" aria-label={person.name}>
              {initials(person.name)}
            </span>
          </Menu>
        )}
      </div>
      <div className="bar-narrow">
        <div className="wrap pb-2 lg:hidden">
          {search('w-full')}
        </div>
      </div>
    </header>
  )
}

function WaitingCount({ n }: { n: number }) {
  return (
    <b className="num ml-[6px] text-12 leading-4 font-medium text-brass">
      {n}
      <span className="sr-only"> waiting</span>
    </b>
  )
}

/** The ball in its notch, in a line of text: where you are, in the folded navigation. */
function Seat() {
  return (
    <svg width="18" height="12" viewBox="0 0 18 12" aria-hidden="true">
      <path d="M0 4.5H4.5L9 10l4.5-5.5H18" fill="none" stroke="var(--rule)" strokeWidth="1.2" />
      <circle cx="9" cy="4.3" r="3.9" fill="var(--brass)" />
    </svg>
  )
}

function isHere(place: Place, path: string): boolean {
  const within = (prefix: string) => path === prefix || path.startsWith(`${prefix}/`)
  return (place.end ? path === place.to : within(place.to)) || (place.also ?? []).some(within)
}

function initials(name: string): string {
  const words = name.split(/\s+/)
  return (words[0].charAt(0) + (words.length > 1 ? words[words.length - 1].charAt(0) : '')).toUpperCase()
}
