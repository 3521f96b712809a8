import { marginClass } from './map-scale.ts'
import type { MapMargin } from './map-scale.ts'
import { token } from './tokens.ts'

export type MapCells = readonly (readonly (MapMargin | null)[])[]

/** Draws the cells, row 0 at the bottom: map-1 … 5 by phase margin, hatched in oxide where unstable (boundary included), the policy region outlined in ink. Cells not yet known stay blank. */
export function drawMap(canvas: HTMLCanvasElement, cells: MapCells, width: number, height: number): void {
  const ctx = canvas.getContext('2d')
  if (!ctx) return
  const px = devicePixelRatio
  canvas.width = Math.round(width * px)
  canvas.height = Math.round(height * px)
  ctx.scale(px, px)
  const rows = cells.length
  const columns = cells[0]?.length ?? 0
  // Edges fall on whole device pixels, so that no seam of the ground shows between neighbours.
  const whole = (v: number) => Math.round(v * px) / px
  const left = (i: number) => whole((i * width) / columns)
  const top = (j: number) => whole(height - ((j + 1) * height) / rows)
  const unstable = (c: MapMargin | null | undefined) => c !== null && c !== undefined && c.verdict !== 'stable'
  const within = (c: MapMargin | null | undefined) => c !== null && c !== undefined && c.verdict === 'stable' && c.withinPolicy

  const hatched = new Path2D()
  for (let j = 0; j < rows; j++) {
    for (let i = 0; i < columns; i++) {
      const cell = cells[j][i]
      if (cell === null) continue
      const at = [left(i), top(j), left(i + 1) - left(i), top(j - 1) - top(j)] as const
      if (unstable(cell)) hatched.rect(...at)
      else {
        ctx.fillStyle = token(`map-${marginClass(cell.phaseMarginDeg)}`)
        ctx.fillRect(...at)
      }
    }
  }
  ctx.save()
  ctx.clip(hatched)
  ctx.fillStyle = token('oxide-wash')
  ctx.fillRect(0, 0, width, height)
  ctx.strokeStyle = token('oxide')
  ctx.globalAlpha = 0.75
  ctx.lineWidth = 1
  ctx.beginPath()
  for (let x = -height; x < width; x += 6) {
    ctx.moveTo(x, height)
    ctx.lineTo(x + height, 0)
  }
  ctx.stroke()
  ctx.restore()
  outline(ctx, cells, unstable, width, height, token('oxide'), 1.5)
  outline(ctx, cells, within, width, height, token('ink'), 2)
}

/** The edges between cells of which one has a property and the other not. Cells not yet known draw no edge. */
function outline(ctx: CanvasRenderingContext2D, cells: MapCells, has: (c: MapMargin | null | undefined) => boolean, width: number, height: number, colour: string, line: number): void {
  const rows = cells.length
  const columns = cells[0]?.length ?? 0
  ctx.strokeStyle = colour
  ctx.lineWidth = line
  ctx.beginPath()
  for (let j = 0; j < rows; j++) {
    for (let i = 0; i < columns; i++) {
      const here = cells[j][i]
      const right = cells[j][i + 1]
      const above = cells[j + 1]?.[i]
      const x = ((i + 1) * width) / columns
      const y = height - ((j + 1) * height) / rows
      if (here && right && has(here) !== has(right)) {
        ctx.moveTo(x, y)
        ctx.lineTo(x, y + height / rows)
      }
      if (here && above && has(here) !== has(above)) {
        ctx.moveTo(x - width / columns, y)
        ctx.lineTo(x, y)
      }
    }
  }
  ctx.stroke()
}
