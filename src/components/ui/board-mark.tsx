import { BOARD_COLOUR, BoardShape } from './board-shape.tsx'
import type { BoardState } from './board-shape.tsx'

export interface BoardMarkProps {
  state: BoardState
  size?: number
  /** Other words than the state's own. */
  children?: React.ReactNode
  className?: string
}

/** A board's state: shape and word. */
export function BoardMark({ state, size = 18, children = state, className = '' }: BoardMarkProps) {
  const ink = BOARD_COLOUR[state]
  return (
    <span className={`mark ${className}`} style={{ color: state === 'unknown' ? undefined : ink }}>
      <svg width={size} height={size} viewBox="0 0 18 18" aria-hidden="true">
        <path d="M5 14.5v3M13 14.5v3" stroke={ink} strokeWidth="1.4" />
        <BoardShape state={state} x={1.8} y={3.2} w={14.4} h={11} ground="none" />
      </svg>
      <span>{children}</span>
    </span>
  )
}
