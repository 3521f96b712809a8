import { Link } from 'react-router'
import { formatHex } from '../../lib/format.ts'
import { BoardShape } from './board-shape.tsx'
import { MIDDLE, SCL, SDA } from './spine-parts.tsx'
import type { SpineTap } from './spine-rows.ts'

export interface TapLinkProps {
  tap: SpineTap
  /** Among the taps of its address. */
  place: 'alone' | 'first' | 'between' | 'last'
  /** How many others have the same address. */
  sharing: number
  selected: boolean
}

/** One tap: address, board between the lines, joint; a ball when a change waits. */
export function TapLink({ tap, place, sharing, selected }: TapLinkProps) {
  const alone = place === 'alone'
  const h = alone ? 33 : 17
  const y = alone ? 16.5 : place === 'first' ? 10 : place === 'last' ? 7 : 8.5
  const wire = alone ? 'var(--ink)' : 'var(--oxide)'
  const words = [tap.joint, formatHex(tap.address), tap.board === 'silent' ? 'board silent' : `board ${tap.board}`, sharing > 0 ? `${sharing + 1} boards at one address` : '', tap.waiting ? 'a change waits' : '']
  return (
    <Link to={tap.to} className={alone ? 'spine-tap' : 'spine-tap spine-tap-doubled'} aria-label={words.filter(Boolean).join(', ')} aria-current={selected ? 'page' : undefined}>
      <svg width="214" height={h} viewBox={`0 0 214 ${h}`} aria-hidden="true">
        <path d={`M${SDA} 0V${h}M${SCL} 0V${h}`} stroke="var(--ink)" strokeWidth="1.3" />
        {tap.board === 'silent' ? (
          <>
            <path d={`M${SDA} ${y}h18M${SCL} ${y}h-18`} stroke={alone ? 'var(--ink-2)' : wire} strokeWidth="1.1" />
            <path d={`M72 ${y - 5}l-4 10M120 ${y - 5}l4 10`} stroke="var(--ink-2)" strokeWidth="1.1" />
            <text x={MIDDLE} y={y + 4} textAnchor="middle">silent</text>
          </>
        ) : (
          <>
            <path d={`M${SDA} ${y}H${SCL}`} stroke={wire} strokeWidth={alone ? 1.2 : 1.5} />
            <BoardShape state={tap.board} x={79} y={y - (alone ? 7.5 : 5.5)} w={34} h={alone ? 15 : 11} />
            <circle cx={SDA} cy={y} r="2" fill={wire} />
            <circle cx={SCL} cy={y} r="2" fill={wire} />
          </>
        )}
        {tap.waiting && <circle cx="127" cy={y - 4.8} r="4.4" fill="var(--brass)" />}
        {(alone || place === 'first') && (
          <text className={alone && tap.board !== 'silent' ? 'num ink' : 'num'} x="44" y={alone ? y + 4 : h * ((sharing + 1) / 2) + 4} textAnchor="end" style={alone ? undefined : { fill: 'var(--oxide)' }}>
            {formatHex(tap.address)}
          </text>
        )}
        <text x="150" y={y + 4.5} className={tap.board === 'silent' ? '' : 'ink'} style={{ fontSize: 13, fill: alone || place === 'first' ? undefined : 'var(--oxide)' }}>
          {tap.joint}
        </text>
      </svg>
    </Link>
  )
}
