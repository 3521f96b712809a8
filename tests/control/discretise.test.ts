import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { expm, zeroOrderHold } from '../../server/control/discretise.ts'
import { NumericError } from '../../server/control/errors.ts'
import { matrixPower, matrixProduct } from '../../server/control/matrix-power.ts'
import { plantMatrices } from '../../server/control/plant.ts'
import { MOTORS } from './random-joints.ts'

const exponential = (A: Float64Array, n: number, h: number): Float64Array => expm(A, n, h, new Float64Array(n * n))
const entry = fc.double({ min: -1, max: 1, noNaN: true })

describe('the matrix exponential', () => {
  it('turns a rotation through its angle', () => {
    for (const angle of [1e-9, 0.3, 2, 50, 1e4]) {
      const E = exponential(Float64Array.of(0, 1, -1, 0), 2, angle)
      // Rounding of the angle itself is angle·2^−53.
      const tol = 1e-15 * Math.max(10, angle)
      expect(Math.abs(E[0] - Math.cos(angle))).toBeLessThanOrEqual(tol)
      expect(Math.abs(E[1] - Math.sin(angle))).toBeLessThanOrEqual(tol)
    }
  })

  it('obeys e^A·e^A = e^2A and e^A·e^−A = 1 on random matrices of any scale', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 7 }), fc.array(entry, { minLength: 49, maxLength: 49 }), fc.double({ min: -3, max: 1, noNaN: true }), (n, values, decade) => {
        const A = Float64Array.from(values.slice(0, n * n), (x) => x * 10 ** decade)
        const once = exponential(A, n, 1)
        const twice = exponential(A, n, 2)
        const back = exponential(A, n, -1)
        const square = matrixProduct(once, once, n)
        const unit = matrixProduct(once, back, n)
        const size = (X: Float64Array): number => Math.max(...X.map(Math.abs))
        const scale = n * 1e-13 * size(once) * size(once)
        square.forEach((x, k) => expect(Math.abs(x - twice[k])).toBeLessThanOrEqual(scale + 1e-13 * size(twice)))
        unit.forEach((x, k) => expect(Math.abs(x - (k % (n + 1) === 0 ? 1 : 0))).toBeLessThanOrEqual(n * 1e-13 * size(once) * size(back)))
      }),
      { seed: 11, numRuns: 200 },
    )
  })

  it('refuses what is not finite, naming the entry', () => {
    expect(() => exponential(Float64Array.of(0, NaN, 0, 0), 2, 1)).toThrow(/0,1/)
    expect(() => exponential(Float64Array.of(1, 0, 0, 1), 2, Infinity)).toThrow(NumericError)
    expect(() => exponential(Float64Array.of(1e200, 0, 0, 1), 2, 1)).toThrow(/norm/)
  })
})

describe('the zero-order hold of a drive train', () => {
  it.each(MOTORS.map((motor, k) => [k, motor] as const))('motor %i: a period is the power of its parts', (_, { plant, firmware }) => {
    const { A, B, n } = plantMatrices(plant, 25)
    const whole = zeroOrderHold(A, B, n, 1, 1 / firmware.f_c)
    const size = n + 1
    const part = zeroOrderHold(A, B, n, 1, 1 / firmware.f_c / 4)
    const block = new Float64Array(size * size)
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) block[i * size + j] = part.Ad[i * n + j]
      block[i * size + n] = part.Bd[i]
    }
    block[size * size - 1] = 1
    const power = matrixPower(block, size, 4)
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) expect(Math.abs(power[i * size + j] - whole.Ad[i * n + j])).toBeLessThanOrEqual(1e-13 * Math.max(1, Math.abs(whole.Ad[i * n + j])))
      expect(Math.abs(power[i * size + n] / whole.Bd[i] - 1)).toBeLessThanOrEqual(1e-10)
    }
    // The free angle is an exact integrator.
    expect(whole.Ad[n * n - 1]).toBe(1)
  })

  it('agrees with a Runge–Kutta integration of the equations', () => {
    const { plant } = MOTORS[1]
    const { A, B, n } = plantMatrices(plant, 80)
    const h = 1e-4
    const { Ad, Bd } = zeroOrderHold(A, B, n, 1, h)
    const x0 = [0.3, 1.2, -0.4, 0.002, 0.5]
    const v = 3
    const f = (x: number[]): number[] => x.map((_, i) => B[i] * v + x.reduce((sum, xj, j) => sum + A[i * n + j] * xj, 0))
    let x = x0.slice()
    const steps = 400
    for (let s = 0; s < steps; s++) {
      const d = h / steps
      const k1 = f(x)
      const k2 = f(x.map((y, i) => y + (d / 2) * k1[i]))
      const k3 = f(x.map((y, i) => y + (d / 2) * k2[i]))
      const k4 = f(x.map((y, i) => y + d * k3[i]))
      x = x.map((y, i) => y + (d / 6) * (k1[i] + 2 * k2[i] + 2 * k3[i] + k4[i]))
    }
    x.forEach((y, i) => {
      let ours = Bd[i] * v
      for (let j = 0; j < n; j++) ours += Ad[i * n + j] * x0[j]
      expect(Math.abs(ours - y)).toBeLessThanOrEqual(1e-10 * Math.max(1, Math.abs(y)))
    })
  })
})
