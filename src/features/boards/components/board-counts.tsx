import { boardStates, type BoardState } from '../../../../shared/contract/boards.ts'
import { BoardMark } from '../../../components/ui/board-mark.tsx'

/** How many boards stand in each state; states without a board are left out. */
export function BoardCounts({ counts, className = '' }: { counts: Readonly<Record<BoardState, number>>; className?: string }) {
  const shown = boardStates.filter((s) => counts[s] > 0)
  if (shown.length === 0) return null
  return (
    <ul className={`flex flex-wrap gap-x-5 gap-y-1 ${className}`} aria-label="boards by state">
      {shown.map((state) => (
        <li key={state} className="inline-flex items-center gap-2 whitespace-nowrap">
          <span className="num text-16">{counts[state]}</span>
          <BoardMark state={state} size={16} />
        </li>
      ))}
    </ul>
  )
}

/** Counts of a list of boards. */
export const countStates = (boards: readonly { state: BoardState }[]): Record<BoardState, number> => Object.fromEntries(boardStates.map((s) => [s, boards.filter((b) => b.state === s).length])) as Record<BoardState, number>
