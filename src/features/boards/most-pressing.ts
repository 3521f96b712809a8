import type { BoardState } from '../../../shared/contract/boards.ts'

const order: readonly BoardState[] = ['withdrawn release on board', 'read-back differs', 'bench set on board', 'not calibrated for this joint', 'outdated', 'unknown', 'current']

/** What is to be flashed first, first; those alike stay in their order. */
export const mostPressingFirst = <T extends { state: BoardState }>(joints: readonly T[]): T[] => joints.toSorted((a, b) => order.indexOf(a.state) - order.indexOf(b.state))
