/** X·Y, both n × n, row by row. */
export function matrixProduct(X: Float64Array, Y: Float64Array, n: number): Float64Array {
  const out = new Float64Array(n * n)
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) {
      const x = X[i * n + k]
      if (x === 0) continue
      for (let j = 0; j < n; j++) out[i * n + j] += x * Y[k * n + j]
    }
  }
  return out
}

/** M to a whole power of at least 0, by repeated squaring. */
export function matrixPower(M: Float64Array, n: number, exponent: number): Float64Array {
  let result: Float64Array | null = null
  let base = M
  for (let left = exponent; left > 0; ) {
    if (left % 2 === 1) result = result ? matrixProduct(base, result, n) : base
    left = Math.floor(left / 2)
    if (left > 0) base = matrixProduct(base, base, n)
  }
  if (result) return result
  const unit = new Float64Array(n * n)
  for (let i = 0; i < n; i++) unit[i * n + i] = 1
  return unit
}
