import type { BoardState } from '../../../../shared/contract/boards.ts'
import { BoardShape } from '../../../components/ui/board-shape.tsx'

/** A joint's place on its bus, with the board there. */
export function TapDrawing({ state }: { state: BoardState }) {
  return (
    <svg width="92" height="44" viewBox="0 0 92 44" role="img" aria-label={`board ${state}`}>
      <path d="M6 0V44M86 0V44" stroke="var(--ink)" strokeWidth="1.4" />
      <path d="M6 22H86" stroke="var(--ink)" strokeWidth="1.3" />
      <circle cx="6" cy="22" r="2.4" fill="var(--ink)" />
      <circle cx="86" cy="22" r="2.4" fill="var(--ink)" />
      <BoardShape state={state} x={24} y={12} w={44} h={20} />
    </svg>
  )
}
