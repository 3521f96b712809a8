/** Slanted lines from x1 to x2 under a ruler's line, as a shore is drawn on a chart. */
export function Hatch({ x1, x2, y, depth, colour }: { x1: number; x2: number; y: number; depth: number; colour: string }) {
  if (x2 - x1 < 0.5) return null
  let d = ''
  for (let x = x1 - depth; x < x2; x += 4) {
    // Each stroke is cut to the stretch instead of clipped, so that no ids are needed.
    const from = Math.max(x, x1)
    const to = Math.min(x + depth, x2)
    if (to > from) d += `M${from.toFixed(1)} ${(y + depth - (from - x)).toFixed(1)}L${to.toFixed(1)} ${(y + depth - (to - x)).toFixed(1)}`
  }
  return <path d={d} stroke={colour} strokeWidth="1" fill="none" />
}
