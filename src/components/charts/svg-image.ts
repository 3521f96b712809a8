import { downloadCanvas } from './download.ts'
import { token } from './tokens.ts'

/** A canvas that lies under the drawing, at its place in the drawing's coordinates. */
export interface CanvasUnder {
  canvas: HTMLCanvasElement
  x: number
  y: number
  width: number
  height: number
}

/**
 * Saves an SVG of the page as PNG by drawing its shapes on a canvas. Loading the SVG as an image would need an address that the
 * content security policy rightly refuses. Knows path, circle, rect, line and text, with solid paints; that is all our drawings use.
 */
export function saveSvg(name: string, svg: SVGSVGElement, under?: CanvasUnder, scale = 2): void {
  const box = svg.viewBox.baseVal
  const pad = 12
  const canvas = document.createElement('canvas')
  canvas.width = (box.width + 2 * pad) * scale
  canvas.height = (box.height + 2 * pad) * scale
  const ctx = canvas.getContext('2d')
  if (!ctx) return
  ctx.fillStyle = token('paper')
  ctx.fillRect(0, 0, canvas.width, canvas.height)
  if (under) ctx.drawImage(under.canvas, (under.x + pad - box.x) * scale, (under.y + pad - box.y) * scale, under.width * scale, under.height * scale)
  const inverse = svg.getCTM()?.inverse()
  for (const shape of svg.querySelectorAll<SVGGraphicsElement>('path, circle, rect, line, text')) {
    const matrix = shape.getCTM()
    const local = matrix && inverse ? inverse.multiply(matrix) : new DOMMatrix()
    ctx.setTransform(scale, 0, 0, scale, (pad - box.x) * scale, (pad - box.y) * scale)
    ctx.transform(local.a, local.b, local.c, local.d, local.e, local.f)
    draw(ctx, shape, getComputedStyle(shape))
  }
  downloadCanvas(name, canvas)
}

function draw(ctx: CanvasRenderingContext2D, shape: SVGGraphicsElement, style: CSSStyleDeclaration): void {
  if (style.visibility === 'hidden') return
  ctx.globalAlpha = Number(style.opacity)
  ctx.lineWidth = Number.parseFloat(style.strokeWidth)
  ctx.lineJoin = style.strokeLinejoin as CanvasLineJoin
  ctx.setLineDash(style.strokeDasharray === 'none' ? [] : style.strokeDasharray.split(/[ ,]+/).map(Number.parseFloat))
  if (shape instanceof SVGTextElement) {
    ctx.font = `${style.fontWeight} ${style.fontSize} ${style.fontFamily}`
    ctx.textAlign = style.textAnchor === 'middle' ? 'center' : style.textAnchor === 'end' ? 'right' : 'left'
    const [x, y] = [number(shape, 'x'), number(shape, 'y')]
    if (style.stroke !== 'none') {
      ctx.strokeStyle = style.stroke
      ctx.strokeText(shape.textContent ?? '', x, y)
    }
    ctx.fillStyle = style.fill
    ctx.fillText(shape.textContent ?? '', x, y)
    return
  }
  const path = outline(shape)
  if (style.fill !== 'none') {
    ctx.fillStyle = style.fill
    ctx.fill(path)
  }
  if (style.stroke !== 'none') {
    ctx.strokeStyle = style.stroke
    ctx.stroke(path)
  }
}

function outline(shape: SVGGraphicsElement): Path2D {
  if (shape instanceof SVGPathElement) return new Path2D(shape.getAttribute('d') ?? '')
  const path = new Path2D()
  if (shape instanceof SVGCircleElement) path.arc(number(shape, 'cx'), number(shape, 'cy'), number(shape, 'r'), 0, 2 * Math.PI)
  else if (shape instanceof SVGRectElement) path.rect(number(shape, 'x'), number(shape, 'y'), number(shape, 'width'), number(shape, 'height'))
  else {
    path.moveTo(number(shape, 'x1'), number(shape, 'y1'))
    path.lineTo(number(shape, 'x2'), number(shape, 'y2'))
  }
  return path
}

function number(shape: Element, name: string): number {
  return Number.parseFloat(shape.getAttribute(name) ?? '0') || 0
}
