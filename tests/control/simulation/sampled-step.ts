import { zeroOrderHold } from '../../../server/control/discretise.ts'

/** Unit-step response of num(s)/den(s), coefficients from the highest power, sampled exactly every dt. */
export function stepOfTransferFunction(num: number[], den: number[], dt: number, count: number): Float64Array {
  const n = den.length - 1
  const a = den.slice(1).map((c) => c / den[0])
  const b = [...new Array<number>(n - num.length).fill(0), ...num].map((c) => c / den[0])
  const A = new Float64Array(n * n)
  for (let c = 0; c < n; c++) A[c] = -a[c]
  for (let r = 1; r < n; r++) A[r * n + r - 1] = 1
  const B = new Float64Array(n)
  B[0] = 1
  const { Ad, Bd } = zeroOrderHold(A, B, n, 1, dt)
  let x = new Float64Array(n)
  let next = new Float64Array(n)
  const y = new Float64Array(count)
  for (let k = 0; k < count; k++) {
    for (let r = 0; r < n; r++) {
      y[k] += b[r] * x[r]
      next[r] = Bd[r]
      for (let c = 0; c < n; c++) next[r] += Ad[r * n + c] * x[c]
    }
    ;[x, next] = [next, x]
  }
  return y
}

/** A linear difference equation num(z)/den(z), coefficients from the highest power; `push` takes an input and returns the output. */
export function differenceEquation(num: number[], den: number[]): (input: number) => number {
  const n = den.length - 1
  const b = [...new Array<number>(n + 1 - num.length).fill(0), ...num]
  const inputs = new Array<number>(n + 1).fill(0)
  const outputs = new Array<number>(n + 1).fill(0)
  return (input) => {
    inputs.unshift(input)
    inputs.pop()
    outputs.unshift(0)
    outputs.pop()
    let sum = 0
    for (let k = 0; k <= n; k++) sum += b[k] * inputs[k] - (k > 0 ? den[k] * outputs[k] : 0)
    return (outputs[0] = sum / den[0])
  }
}

/** Coefficients of Π (z − root), scaled. */
export function polynomial(gain: number, roots: number[]): number[] {
  let c = [gain]
  for (const root of roots) c = [...c, 0].map((value, k) => value - (k > 0 ? root * c[k - 1] : 0))
  return c
}
