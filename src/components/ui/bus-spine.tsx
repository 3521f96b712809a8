import type { KeyboardEvent } from 'react'
import { Link } from 'react-router'
import { formatQuantity } from '../../lib/format.ts'
import { FreeRun, SpineHead } from './spine-parts.tsx'
import { spineRows } from './spine-rows.ts'
import type { SpineTap } from './spine-rows.ts'
import { TapLink } from './spine-tap.tsx'

export interface BusSpineProps {
  name: string
  /** Where the bus's own page is. */
  to?: string
  bitRate: number
  /** V */
  supply: number
  /** Ω */
  pullUp: number
  taps: readonly SpineTap[]
  /** Key of the tap whose joint is shown. */
  selected?: string
}

/**
 * A bus and its joints as navigation: two hairlines, SDA and SCL, with a tap per joint in address order, the free stretches between, and
 * doubled taps where two boards have one address. Each tap is a link to its joint; ↑ ↓ Home End move between them.
 */
export function BusSpine({ name, to, bitRate, supply, pullUp, taps, selected }: BusSpineProps) {
  const rate = formatQuantity(bitRate, 'bit/s')
  return (
    <nav aria-label={`bus ${name}`} className="w-[214px]">
      <div className="mb-2 flex items-baseline justify-between">
        {to === undefined ? <b className="text-16">{name}</b> : <Link to={to} className="row-link text-16">{name}</Link>}
        <span className="text-12 text-ink-2">
          {rate.number} {rate.unit}
        </span>
      </div>
      <SpineHead supply={supply} pullUp={pullUp} />
      <ul onKeyDown={moveByTap}>
        {spineRows(taps).map((row) =>
          row.kind === 'free' ? (
            <li key={`free ${row.from}`}>
              <FreeRun count={row.count} />
            </li>
          ) : (
            row.taps.map((tap, i) => (
              <li key={tap.key}>
                <TapLink tap={tap} place={row.taps.length === 1 ? 'alone' : i === 0 ? 'first' : i === row.taps.length - 1 ? 'last' : 'between'} sharing={row.taps.length - 1} selected={tap.key === selected} />
              </li>
            ))
          ),
        )}
      </ul>
    </nav>
  )
}

function moveByTap(event: KeyboardEvent<HTMLUListElement>) {
  const links = [...event.currentTarget.querySelectorAll<HTMLElement>('a')]
  const here = links.findIndex((l) => l === document.activeElement)
  const next =
    event.key === 'ArrowDown' ? Math.min(here + 1, links.length - 1)
    : event.key === 'ArrowUp' ? Math.max(here - 1, 0)
    : event.key === 'Home' ? 0
    : event.key === 'End' ? links.length - 1
    : null
  if (next === null || here < 0) return
  event.preventDefault()
  links[next].focus()
}
