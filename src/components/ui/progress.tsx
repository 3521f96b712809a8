import { formatDuration, formatFixed } from '../../lib/format.ts'
import { useWidth } from './use-width.ts'

export interface ProgressProps {
  label: string
  done: number
  total: number
  /** What is counted: "cells". */
  noun: string
  secondsLeft?: number | null
  onStop?: () => void
  /** After the rest: "goes on if you leave". */
  note?: string
}

/** Long work: the ball runs along a scale; what is done, what is left, and a way to stop it. */
export function Progress({ label, done, total, noun, secondsLeft, onStop, note = 'goes on if you leave' }: ProgressProps) {
  const [ref, width] = useWidth<HTMLDivElement>(400)
  const share = total > 0 ? Math.min(1, Math.max(0, done / total)) : 0
  const x = 6 + share * (width - 12)
  const whole = (n: number) => formatFixed(n, 0)
  return (
    <div ref={ref}>
      <div className="flex justify-between gap-3 text-13">
        <span>{label}</span>
        {onStop && (
          <button type="button" className="link" onClick={onStop}>
            stop<span className="sr-only"> {label}</span>
          </button>
        )}
      </div>
      <div role="progressbar" aria-label={label} aria-valuemin={0} aria-valuemax={total} aria-valuenow={done} aria-valuetext={`${whole(done)} of ${whole(total)} ${noun}`} className="mt-2">
        <svg width={width} height="20" viewBox={`0 0 ${width} 20`} aria-hidden="true">
          <path d={`M0 8H${width}`} stroke="var(--rule)" />
          <path d={Array.from({ length: 33 }, (_, i) => `M${6 + (i * (width - 12)) / 32} 8v${i % 8 === 0 ? 6 : 4}`).join('')} stroke="var(--rule)" />
          <path d={`M0 8H${x}`} stroke="var(--ink)" strokeWidth="2" />
          <circle cx={x} cy="7" r="5.5" fill="var(--brass)" />
        </svg>
      </div>
      <div className="flex flex-wrap justify-between gap-x-3 text-13 text-ink-2">
        <span>
          <span className="num grouped">{whole(done)}</span> of <span className="num grouped">{whole(total)}</span> {noun}
        </span>
        <span>{[secondsLeft === null || secondsLeft === undefined ? '' : `about ${formatDuration(Math.max(1, secondsLeft))} left`, note].filter(Boolean).join(', ')}</span>
      </div>
    </div>
  )
}
