/** Identification entries with published or derived values; each carries its source in identification.json. */
import { describe, expect, it } from 'vitest'
import { LeastSquares } from '../../../../server/control/identification/least-squares.ts'
import { seededRandom } from '../../../../server/control/random.ts'
import { Drive } from '../../../../server/control/simulation/drive.ts'
import { bareMotor } from '../../simulation/joints.ts'
import entries from './identification.json'

describe('published identification', () => {
  it('least squares returns the sampled coefficients of a motor driven by a noise-free random binary voltage', () => {
    const entry = entries.find((e) => e.id === 'ident.ctms.exact')
    if (entry === undefined || entry.expected === null) throw new Error('entry missing')
    const drive = new Drive(bareMotor({ J: 0.01, b: 0.1, K: 0.01, R: 1, L: 0.5, unit: 0.05 }))
    const random = seededRandom(400)
    const u = new Float64Array(400)
    const y = new Float64Array(400)
    for (let k = 0; k < 400; k++) {
      y[k] = drive.x[1]
      u[k] = random() < 0.5 ? -1 : 1
      drive.v = u[k]
      drive.advance(1)
    }
    const ls = new LeastSquares(4)
    for (let k = 2; k < 400; k++) ls.add([-y[k - 1], -y[k - 2], u[k - 1], u[k - 2], y[k]])
    const { coefficients } = ls.solve()
    entry.expected.forEach((value, k) => {
      expect(Math.abs(coefficients[k] - value), `${entry.id} ${k} (${entry.source})`).toBeLessThanOrEqual(entry.tolerance.abs ?? 0)
    })
  })

  it('lists the generator data set, whose half a million rows are not kept here, without claiming to check it', () => {
    const entry = entries.find((e) => e.id === 'ident.dataset.generator')
    expect(entry?.expected).toBeNull()
    expect(entries.length).toBe(2)
  })
})

describe('least squares', () => {
  it('gives the textbook line with its covariance and residual', () => {
    // Points (0,1), (1,3), (2,4), (3,7): slope 1.9, intercept 0.9, squared residuals 0.7.
    const ls = new LeastSquares(2)
    for (const [x, y] of [[0, 1], [1, 3], [2, 4], [3, 7]]) ls.add([1, x, y])
    const fit = ls.solve()
    expect(fit.coefficients[0]).toBeCloseTo(0.9, 12)
    expect(fit.coefficients[1]).toBeCloseTo(1.9, 12)
    expect(fit.residualSquares).toBeCloseTo(0.7, 12)
    expect(fit.freedom).toBe(2)
    // (XᵀX)⁻¹ of that design: [[0.7, −0.3], [−0.3, 0.2]].
    expect([...fit.covariance].map((c) => Math.round(c * 1e9) / 1e9)).toEqual([0.7, -0.3, -0.3, 0.2])
  })

  it('says when a column adds nothing', () => {
    const ls = new LeastSquares(3)
    for (let k = 0; k < 1000; k++) ls.add([k, 2 * k, 1, k])
    expect(ls.solve().condition).toBe(Infinity)
  })

  it('does not depend on the order in which blocks are folded', () => {
    const random = seededRandom(9)
    const rows = Array.from({ length: 1500 }, () => [random(), random(), random(), random()])
    const solve = (list: number[][]): number[] => {
      const ls = new LeastSquares(3)
      list.forEach((row) => ls.add(row))
      return [...ls.solve().coefficients]
    }
    const [a, b] = [solve(rows), solve([...rows].reverse())]
    a.forEach((value, k) => expect(b[k]).toBeCloseTo(value, 12))
  })
})
