/** A quantity of a drive train: its nominal value alone, or with bounds. */
export type Quantity = number | { value: number; low: number; high: number }

export const nominal = (q: Quantity): number => (typeof q === 'number' ? q : q.value)

/** The bounds of a quantity, or null where it has none or they meet. */
export const bounds = (q: Quantity | undefined): [low: number, high: number] | null =>
  q === undefined || typeof q === 'number' || q.low === q.high ? null : [q.low, q.high]
