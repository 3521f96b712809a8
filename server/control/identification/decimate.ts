/** Points of a series to draw: of every piece the least and the greatest, so that no peak is lost. */

export interface DrawnPoints {
  x: number[]
  /** null: a gap */
  y: (number | null)[]
  /** rows behind each piece; 1: every row is there */
  rowsPerPiece: number
}

/**
 * Cuts rows [from, to) into at most `pieces` pieces and keeps of each its least and its greatest, in the order they came.
 *
 * @param gapsBefore  rows, rising, before which a gap lies: the line breaks there
 */
export function decimate(time: ArrayLike<number>, values: ArrayLike<number>, { from, to, pieces, gapsBefore = [] }: { from: number; to: number; pieces: number; gapsBefore?: readonly number[] }): DrawnPoints {
  const rowsPerPiece = to - from <= 2 * pieces ? 1 : Math.ceil((to - from) / pieces)
  const x: number[] = []
  const y: (number | null)[] = []
  const put = (k: number) => {
    x.push(time[k])
    y.push(values[k])
  }
  let gap = gapsBefore.findIndex((g) => g > from)
  for (let start = from; start < to; ) {
    const nextGap = gap >= 0 && gap < gapsBefore.length ? gapsBefore[gap] : Infinity
    const end = Math.min(to, start + rowsPerPiece, nextGap)
    let [low, high] = [start, start]
    for (let k = start + 1; k < end; k++) {
      if (values[k] < values[low]) low = k
      if (values[k] > values[high]) high = k
    }
    put(Math.min(low, high))
    if (low !== high) put(Math.max(low, high))
    if (end === nextGap && end < to) {
      x.push((time[end - 1] + time[end]) / 2)
      y.push(null)
      gap += 1
    }
    start = end
  }
  return { x, y, rowsPerPiece }
}
