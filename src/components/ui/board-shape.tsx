export type BoardState =
  | 'current'
  | 'outdated'
  | 'withdrawn release on board'
  | 'bench set on board'
  | 'unknown'
  | 'read-back differs'
  | 'not calibrated for this joint'

export const BOARD_COLOUR: Record<BoardState, string> = {
  current: 'var(--verdigris)',
  outdated: 'var(--plum)',
  'withdrawn release on board': 'var(--oxide)',
  'bench set on board': 'var(--ink)',
  unknown: 'var(--ink-2)',
  'read-back differs': 'var(--oxide)',
  'not calibrated for this joint': 'var(--oxide)',
}

/**
 * A board as drawn on bus and in tables, in a box of w × h at x, y. Filled: current. Half: outdated. Crossed: withdrawn release.
 * Barred upright: bench set. Dashed: unknown. Two unequal lines: read-back differs. Hollow ring: not calibrated.
 */
export function BoardShape({ state, x, y, w, h, ground = 'var(--paper)' }: { state: BoardState; x: number; y: number; w: number; h: number; ground?: string }) {
  const ink = BOARD_COLOUR[state]
  const cx = x + w / 2
  const cy = y + h / 2
  const k = h / 15
  return (
    <>
      <rect x={x} y={y} width={w} height={h} rx="1" fill={state === 'current' ? ink : ground} stroke={ink} strokeWidth="1.4" strokeDasharray={state === 'unknown' ? '2.4 2.2' : undefined} />
      {state === 'outdated' && <rect x={x} y={cy} width={w} height={h / 2} fill={ink} />}
      {state === 'withdrawn release on board' && <path d={`M${cx - 9 * k} ${cy - 4 * k}l${18 * k} ${8 * k}M${cx - 9 * k} ${cy + 4 * k}l${18 * k} ${-8 * k}`} stroke={ink} strokeWidth="1.5" />}
      {state === 'bench set on board' && <path d={[-6, -2, 2, 6].map((d) => `M${cx + d * k} ${y + 3 * k}V${y + h - 3 * k}`).join('')} stroke={ink} strokeWidth="1.6" />}
      {state === 'read-back differs' && <path d={`M${cx - 7} ${cy - 2 * k}h14M${cx - 7} ${cy + 2 * k}h7`} stroke={ink} strokeWidth="1.6" />}
      {state === 'not calibrated for this joint' && <circle cx={cx} cy={cy} r={3.6 * k} fill="none" stroke={ink} strokeWidth="1.5" />}
    </>
  )
}
