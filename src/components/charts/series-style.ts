/** What a series is decides how it is drawn: the same everywhere. */
export type SeriesRole = 'released' | 'candidate' | 'measured' | 'worst vertex' | 'set-point' | 'other'

export interface SeriesStyle {
  colour: string
  width: number
  dash?: number[]
  /** Points only, as measured values are. */
  points?: boolean
}

/** Ink: released. Brass: candidate. Slate points: measured. Dotted brass: worst vertex. Quiet dash-dot: set-point. */
export const SERIES_STYLES: Record<SeriesRole, SeriesStyle> = {
  released: { colour: 'ink', width: 1.5 },
  candidate: { colour: 'brass', width: 2.3 },
  measured: { colour: 'slate', width: 0, points: true },
  'worst vertex': { colour: 'brass', width: 1.3, dash: [3, 3] },
  'set-point': { colour: 'ink-2', width: 1, dash: [6, 3, 1, 3] },
  other: { colour: 'ink-2', width: 1.2 },
}
