import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { decimate } from '../../../server/control/identification/decimate.ts'

const signal = fc.array(fc.double({ noNaN: true, noDefaultInfinity: true }), { minLength: 1, maxLength: 400 })

describe('points to draw', () => {
  it('keep the least and the greatest of every window, whatever the pieces', () => {
    fc.assert(
      fc.property(signal, fc.integer({ min: 1, max: 50 }), fc.nat(), fc.nat(), (y, pieces, a, b) => {
        const [from, to] = [a % y.length, (a % y.length) + 1 + (b % (y.length - (a % y.length)))]
        const drawn = decimate(y.map((_, k) => k), y, { from, to, pieces })
        const kept = drawn.y.filter((v) => v !== null)
        const seen = y.slice(from, to)
        return Math.max(...kept) === Math.max(...seen) && Math.min(...kept) === Math.min(...seen)
      }),
    )
  })

  it('are points of the signal, in order, two a piece at most', () => {
    fc.assert(
      fc.property(signal, fc.integer({ min: 1, max: 50 }), (y, pieces) => {
        const { x, y: drawn, rowsPerPiece } = decimate(y.map((_, k) => k), y, { from: 0, to: y.length, pieces })
        return x.every((t, k) => drawn[k] === y[t] && (k === 0 || t > x[k - 1])) && (rowsPerPiece === 1 ? x.length === y.length : x.length <= 2 * pieces)
      }),
    )
  })

  it('break the line at a gap and draw nothing across it', () => {
    const time = [0, 1, 2, 10, 11, 12]
    const { x, y } = decimate(time, [5, 6, 7, 8, 9, 10], { from: 0, to: 6, pieces: 6, gapsBefore: [3] })
    expect(y).toEqual([5, 6, 7, null, 8, 9, 10])
    expect(x[3]).toBe(6)
  })

  it('show a single spike in a million rows', () => {
    const y = new Float64Array(1_000_000)
    y[654_321] = 9
    const drawn = decimate(y.map((_, k) => k), y, { from: 0, to: y.length, pieces: 700 })
    expect(drawn.x.length).toBeLessThanOrEqual(1400)
    expect(drawn.y[drawn.x.indexOf(654_321)]).toBe(9)
  })
})
