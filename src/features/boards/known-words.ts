import type { BoardSummary, MachineBoards } from '../../../shared/contract/boards.ts'

/** How it is known what a board holds, in words for a cell. */
export const knownWords = (board: Pick<BoardSummary, 'known'>): string => (board.known === null ? 'not recorded' : board.known === 'read back' ? 'read back' : 'recorded')

/** Joints whose board holds something on record that was never read back. */
export const notReadBack = (boards: MachineBoards) => boards.joints.filter((j) => j.board?.release && !j.readBack)
