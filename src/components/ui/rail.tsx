import type { ReactNode } from 'react'
import { Time } from './time.tsx'
import { useWidth } from './use-width.ts'

export type RailPlace = 'draft' | 'submitted' | 'approved' | 'released'
const PLACES: readonly RailPlace[] = ['draft', 'submitted', 'approved', 'released']

export interface RailMark {
  who: string
  at: string
}

export interface RailProps {
  /** The notch the ball lies in. */
  at: RailPlace
  /** Who brought it there and when, for each notch reached. */
  marks: Partial<Record<RailPlace, RailMark>>
  /** A notch the change was knocked out of. */
  struck?: { place: RailPlace; word: 'returned' | 'void'; who?: string; at?: string }
  cancelled?: { who: string; at: string }
  /** The two signatures between the notches. */
  peerReview?: SignatureState
  release?: SignatureState
}

export type SignatureState = 'open' | 'signed' | 'void'

/** The life of a change: notches with who and when, the ball in the one reached. Narrower than 420 px it stands upright. */
export function Rail({ at, marks, struck, cancelled, peerReview = 'open', release = 'open' }: RailProps) {
  const [ref, width] = useWidth<HTMLDivElement>(620)
  const here = PLACES.indexOf(at)
  const entries = PLACES.map((place, i) => {
    const lost = struck?.place === place && i > here ? struck : undefined
    const ended = cancelled && i === here
    const mark = ended ? cancelled : i <= here ? marks[place] : undefined
    return {
      place,
      i,
      word: ended ? 'cancelled' : place,
      reached: i <= here,
      current: i === here,
      who: lost ? <span>{lost.word}</span> : mark?.who,
      when: lost?.at ?? mark?.at,
    }
  })
  const upright = width < 420
  return (
    <div ref={ref} className={upright ? 'rail rail-upright' : 'rail'}>
      {!upright && <Line width={width} here={here} struck={struck && PLACES.indexOf(struck.place)} cancelled={Boolean(cancelled)} peerReview={peerReview} release={release} />}
      <ol aria-label="life of the change">
        {entries.map((e) => (
          <li key={e.place} aria-current={e.current ? 'step' : undefined}>
            {upright && <Notch ball={e.current ? (cancelled ? 'hollow' : 'brass') : null} reached={e.reached} last={e.i === 3} struck={struck?.place === e.place && e.i > here} />}
            <div className={e.reached ? '' : 'text-ink-2'}>
              <div className={`text-13 ${e.current ? 'font-medium' : ''}`}>{e.word}</div>
              {e.who && <div className="text-12">{e.who}</div>}
              {e.when && <div className="num text-12 text-ink-2"><Time at={e.when} /></div>}
              {!e.reached && !e.who && <span className="sr-only">not yet</span>}
            </div>
          </li>
        ))}
      </ol>
      {!upright && <Signature left="50%" state={peerReview}>peer review</Signature>}
      {!upright && <Signature left="75%" state={release}>release</Signature>}
      {upright && <p className="text-12 text-ink-2">peer review {words(peerReview)}, release {words(release)}</p>}
    </div>
  )
}

function words(state: SignatureState): string {
  return state === 'signed' ? 'signed' : state === 'void' ? 'void' : 'not signed yet'
}

function Signature({ left, state, children }: { left: string; state: SignatureState; children: ReactNode }) {
  return (
    <span className="rail-signature" style={{ left, color: state === 'void' ? 'var(--oxide)' : state === 'signed' ? 'var(--ink)' : undefined }}>
      {children}
      <span className="sr-only"> {words(state)}</span>
    </span>
  )
}

interface LineProps {
  width: number
  here: number
  struck?: number
  cancelled: boolean
  peerReview: SignatureState
  release: SignatureState
}

function Line({ width, here, struck, cancelled, peerReview, release }: LineProps) {
  const x = (i: number) => (width * (2 * i + 1)) / 8
  const notches = (n: number) => Array.from({ length: n + 1 }, (_, i) => `L${x(i) - 10} 26L${x(i)} 38L${x(i) + 10} 26`).join('')
  return (
    <svg width={width} height="44" viewBox={`0 0 ${width} 44`} aria-hidden="true">
      <path d={`M0 26${notches(3)}L${width} 26`} fill="none" stroke="var(--rule)" strokeWidth="1.2" />
      <path d={`M0 26${notches(here)}`} fill="none" stroke="var(--ink)" strokeWidth="2" />
      {[peerReview, release].map((state, i) => (
        <g key={i} transform={`translate(${width * (0.5 + 0.25 * i)} 26)`}>
          <path d="M0 -5v10" stroke={state === 'signed' ? 'var(--ink)' : state === 'void' ? 'var(--oxide)' : 'var(--rule)'} strokeWidth={state === 'open' ? 1.2 : 2} />
          {state === 'void' && <path d="M-4 4l8-8" stroke="var(--oxide)" strokeWidth="1.6" />}
        </g>
      ))}
      {cancelled ? (
        <>
          <path d={`M${x(here) + 18} 16l7 8-7 5 7 9`} fill="none" stroke="var(--ink)" strokeWidth="1.5" />
          <circle cx={x(here)} cy="24.6" r="7" fill="var(--sheet)" stroke="var(--ink)" strokeWidth="1.6" />
        </>
      ) : (
        <circle cx={x(here)} cy="24.6" r="8" fill="var(--brass)" />
      )}
      {struck !== undefined && struck > here && <path d={`M${x(struck) - 11} 41l22-23`} stroke="var(--oxide)" strokeWidth="2.2" />}
    </svg>
  )
}

/** One notch of the upright rail. */
function Notch({ ball, reached, last, struck }: { ball: 'brass' | 'hollow' | null; reached: boolean; last: boolean; struck: boolean }) {
  const ink = reached ? 'var(--ink)' : 'var(--rule)'
  return (
    <svg width="26" aria-hidden="true">
      {!last && <line x1="13" x2="13" y1="22" y2="100%" stroke="var(--hairline)" />}
      <path d="M0 7H5l8 9.5L21 7h5" fill="var(--paper)" stroke={ink} strokeWidth={reached ? 1.6 : 1.2} />
      {ball === 'brass' && <circle cx="13" cy="6.6" r="6" fill="var(--brass)" />}
      {ball === 'hollow' && <circle cx="13" cy="6.6" r="5.4" fill="var(--sheet)" stroke="var(--ink)" strokeWidth="1.6" />}
      {struck && <path d="M5 18L21 1" stroke="var(--oxide)" strokeWidth="2" />}
    </svg>
  )
}
