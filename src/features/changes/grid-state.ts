/** Where the table stands: the cell that keys act on, the block selected from it, and whether it is being edited. Pure. */
export interface GridState {
  row: number
  column: number
  /** the corner that a selection began at; the chosen cell where nothing is selected */
  fromRow: number
  fromColumn: number
  editing: boolean
  /** what the editor begins with; null: the value as it stands */
  first: string | null
  /** counts up when the chosen cell is to take the focus */
  focus: number
}

export interface GridSize {
  rows: number
  columns: number
}

export type GridAct =
  /** `extend`: the selection reaches here; `anew`: it begins here, even where this cell is chosen already */
  | { kind: 'choose'; row: number; column: number; extend?: boolean; anew?: boolean }
  | { kind: 'move'; rows: number; columns: number; extend?: boolean; size: GridSize }
  | { kind: 'begin'; first: string | null }
  | { kind: 'end'; way: 'down' | 'right' | 'left' | 'stay'; size: GridSize }
  | { kind: 'leave' }

export const startState: GridState = { row: 0, column: 0, fromRow: 0, fromColumn: 0, editing: false, first: null, focus: 0 }

/** Begun in the first row of a column. */
export const startAt = (column: number): GridState => ({ ...startState, column, fromColumn: column })

const held = (n: number, count: number) => Math.max(0, Math.min(count - 1, n))
const wayOf = { down: [1, 0], right: [0, 1], left: [0, -1], stay: [0, 0] } as const

const standAt = (state: GridState, row: number, column: number, extend: boolean): GridState => ({ ...state, row, column, fromRow: extend ? state.fromRow : row, fromColumn: extend ? state.fromColumn : column })

export function gridState(state: GridState, act: GridAct): GridState {
  switch (act.kind) {
    case 'choose':
      // The chosen cell takes the focus when a selection reached it, and so does the editor inside it: that is no new choice.
      if (act.row === state.row && act.column === state.column && !act.anew) return state
      return { ...standAt(state, act.row, act.column, act.extend ?? false), editing: state.editing && act.row === state.row && act.column === state.column }
    case 'move':
      return { ...standAt(state, held(state.row + act.rows, act.size.rows), held(state.column + act.columns, act.size.columns), act.extend ?? false), editing: false, focus: state.focus + 1 }
    case 'begin':
      return { ...state, editing: true, first: act.first }
    case 'end': {
      const [rows, columns] = wayOf[act.way]
      return { ...standAt(state, held(state.row + rows, act.size.rows), held(state.column + columns, act.size.columns), false), editing: false, focus: state.focus + 1 }
    }
    case 'leave':
      return state.editing ? { ...state, editing: false } : state
  }
}

/** The selected block, corners in order. */
export const selectionOf = (s: GridState) => ({ top: Math.min(s.row, s.fromRow), bottom: Math.max(s.row, s.fromRow), left: Math.min(s.column, s.fromColumn), right: Math.max(s.column, s.fromColumn) })

/** What a key does to the choice; null: nothing. */
export function moveOf(key: string, size: GridSize): { rows: number; columns: number } | null {
  const moves: Record<string, readonly [number, number]> = {
    ArrowDown: [1, 0], ArrowUp: [-1, 0], ArrowLeft: [0, -1], ArrowRight: [0, 1], PageDown: [10, 0], PageUp: [-10, 0], Home: [0, -size.columns], End: [0, size.columns],
  }
  const move = Object.hasOwn(moves, key) ? moves[key] : null
  return move && { rows: move[0], columns: move[1] }
}
