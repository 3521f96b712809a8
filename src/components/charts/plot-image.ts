import type uPlot from 'uplot'
import { downloadCanvas } from './download.ts'
import type { LegendEntry } from './legend.tsx'
import { SERIES_STYLES } from './series-style.ts'
import { token } from './tokens.ts'

export interface PlotPart {
  plot: uPlot
  /** Name and unit of the vertical axis. */
  y: string
  /** Name and unit below; absent where another plot stands under it. */
  x?: string
}

/** Saves plots under one another as one PNG, with title, legend and axis names, on the present ground. */
export function savePlots(name: string, title: string, legend: readonly LegendEntry[], parts: readonly PlotPart[]): void {
  const px = devicePixelRatio
  const width = Math.max(...parts.map((p) => p.plot.ctx.canvas.width)) + 24 * px
  const head = 50 * px
  const heights = parts.map((p) => p.plot.ctx.canvas.height + (p.x === undefined ? 18 : 38) * px)
  const canvas = document.createElement('canvas')
  canvas.width = width
  canvas.height = head + heights.reduce((a, b) => a + b, 0) + 8 * px
  const ctx = canvas.getContext('2d')
  if (!ctx) return
  ctx.fillStyle = token('paper')
  ctx.fillRect(0, 0, canvas.width, canvas.height)
  const write = (text: string, x: number, y: number, { colour = 'ink-2', size = 12, weight = 400, align = 'left' as CanvasTextAlign } = {}) => {
    ctx.font = `${weight} ${size * px}px "Fira Sans", sans-serif`
    ctx.fillStyle = token(colour)
    ctx.textAlign = align
    ctx.fillText(text, x, y)
    return ctx.measureText(text).width
  }
  write(title, 12 * px, 20 * px, { colour: 'ink', size: 16, weight: 500 })
  let x = 12 * px
  for (const entry of legend) {
    const style = SERIES_STYLES[entry.role]
    ctx.save()
    ctx.strokeStyle = token(style.colour)
    ctx.lineWidth = (style.points ? 3 : style.width) * px
    ctx.setLineDash((style.points ? [3, 3] : (style.dash ?? [])).map((d) => d * px))
    ctx.beginPath()
    ctx.moveTo(x, 36 * px)
    ctx.lineTo(x + 22 * px, 36 * px)
    ctx.stroke()
    ctx.restore()
    x += 28 * px
    x += write(entry.label, x, 40 * px) + 14 * px
  }
  let y = head
  parts.forEach((part, i) => {
    write(part.y, 12 * px, y + 12 * px)
    ctx.drawImage(part.plot.ctx.canvas, 12 * px, y + 16 * px)
    if (part.x !== undefined) write(part.x, 12 * px + part.plot.ctx.canvas.width, y + part.plot.ctx.canvas.height + 30 * px, { align: 'right' })
    y += heights[i]
  })
  downloadCanvas(name, canvas)
}
