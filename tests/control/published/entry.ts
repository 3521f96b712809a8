import { readFileSync } from 'node:fs'

/** One published value, as the fixture files hold it. */
export interface Entry {
  readonly id: string
  readonly inputs: Record<string, unknown>
  readonly expected: unknown
  readonly tolerance: { readonly abs?: number; readonly rel?: number; readonly fields?: Record<string, number | number[]> }
  readonly source: string
  readonly recomputed: unknown
}

export function entries(name: string): Entry[] {
  return JSON.parse(readFileSync(new URL(`./${name}.json`, import.meta.url), 'utf8')) as Entry[]
}

/** The entry of an id; a fixture without it is a broken test. */
export function entryOf(list: readonly Entry[], id: string): Entry {
  const found = list.find((entry) => entry.id === id)
  if (!found) throw new Error(`no published entry ${id}`)
  return found
}

/** Coefficients of a product of polynomials, highest power first. */
export function product(...factors: number[][]): number[] {
  return factors.reduce((a, b) => {
    const out = new Array<number>(a.length + b.length - 1).fill(0)
    a.forEach((x, i) => b.forEach((y, j) => (out[i + j] += x * y)))
    return out
  }, [1])
}

/** Controllable companion form of num/den (highest power first, deg num ≤ deg den). */
export function companion(num: readonly number[], den: readonly number[]): { A: Float64Array; B: Float64Array; C: Float64Array; D: number; n: number } {
  const n = den.length - 1
  const a = den.map((x) => x / den[0])
  const b = [...new Array<number>(n + 1 - num.length).fill(0), ...num].map((x) => x / den[0])
  const A = new Float64Array(n * n)
  for (let j = 0; j < n; j++) A[j] = -a[j + 1]
  for (let i = 1; i < n; i++) A[i * n + i - 1] = 1
  const B = new Float64Array(n)
  B[0] = 1
  const C = Float64Array.from({ length: n }, (_, j) => b[j + 1] - b[0] * a[j + 1])
  return { A, B, C, D: b[0], n }
}
