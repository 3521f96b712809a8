/** X·Y, both n × n, row by row; `out`, where given, is neither. */
export function matrixProduct(X: Float64Array, Y: Float64Array, n: number, out: Float64Array = new Float64Array(n * n)): Float64Array {
  for (let i = 0; i < n; i++) {
    const row = i * n
    for (let j = 0; j < n; j++) {
      let sum = 0
      for (let k = 0; k < n; k++) sum += X[row + k] * Y[k * n + j]
      out[row + j] = sum
    }
  }
  return out
}

/** Matrices of one order for powers: no allocation in sweeps. */
export interface PowerWorkspace {
  readonly a: Float64Array
  readonly b: Float64Array
  readonly c: Float64Array
}

export function powerWorkspace(n: number): PowerWorkspace {
  return { a: new Float64Array(n * n), b: new Float64Array(n * n), c: new Float64Array(n * n) }
}

/**
 * M to a whole power of at least 0, by repeated squaring.
 *
 * @param out  n × n; not M
 */
export function matrixPower(M: Float64Array, n: number, exponent: number, out: Float64Array = new Float64Array(n * n), work: PowerWorkspace = powerWorkspace(n)): Float64Array {
  const size = n * n
  let started = false
  let base = M
  let spareBase = work.a
  let result = out
  let spareResult = work.b
  let otherBase = work.c
  for (let left = exponent; left > 0; ) {
    if (left % 2 === 1) {
      if (started) {
        matrixProduct(base, result, n, spareResult)
        const t = result
        result = spareResult
        spareResult = t
      } else {
        for (let k = 0; k < size; k++) result[k] = base[k]
        started = true
      }
    }
    left = Math.floor(left / 2)
    if (left > 0) {
      matrixProduct(base, base, n, spareBase)
      base = spareBase
      spareBase = otherBase
      otherBase = base
    }
  }
  if (!started) for (let k = 0; k < size; k++) out[k] = k % (n + 1) === 0 ? 1 : 0
  else if (result !== out) for (let k = 0; k < size; k++) out[k] = result[k]
  return out
}
