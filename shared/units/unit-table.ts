import { dimension, type Dimension } from './dimension.ts'

/** A named unit: `factor` (exact, a decimal or ratio) times π^`pi` of the SI unit; `zero` is its zero point in SI (°C only). */
export interface NamedUnit {
  readonly dimension: Dimension
  readonly factor: readonly [bigint, bigint]
  readonly pi: 0 | 1
  readonly zero?: string
  /** May carry an SI prefix. */
  readonly prefixed: boolean
}

const si = (powers: Parameters<typeof dimension>[0], prefixed = true): NamedUnit => ({
  dimension: dimension(powers), factor: [1n, 1n], pi: 0, prefixed,
})
const scaled = (powers: Parameters<typeof dimension>[0], over: bigint, under = 1n, pi: 0 | 1 = 0): NamedUnit => ({
  dimension: dimension(powers), factor: [over, under], pi, prefixed: false,
})

const count = si({ count: 1 }, false)
const degree = scaled({ rad: 1 }, 1n, 180n, 1)
const turn = scaled({ rad: 1 }, 2n, 1n, 1)

/** Every unit name that an `x-unit` or a typed value may use. */
export const UNITS: Readonly<Record<string, NamedUnit>> = {
  '1': si({}, false),
  '%': scaled({}, 1n, 100n),
  s: si({ s: 1 }),
  min: scaled({ s: 1 }, 60n),
  h: scaled({ s: 1 }, 3600n),
  Hz: si({ s: -1 }),
  m: si({ m: 1 }),
  g: { ...si({ kg: 1 }), factor: [1n, 1000n] },
  A: si({ A: 1 }),
  K: si({ K: 1 }),
  '°C': { ...si({ K: 1 }, false), zero: '273.15' },
  degC: { ...si({ K: 1 }, false), zero: '273.15' },
  rad: si({ rad: 1 }),
  deg: degree,
  '°': degree,
  rev: turn,
  turn,
  rpm: scaled({ rad: 1, s: -1 }, 1n, 30n, 1),
  V: si({ kg: 1, m: 2, s: -3, A: -1 }),
  Ω: si({ kg: 1, m: 2, s: -3, A: -2 }),
  '\u2126': si({ kg: 1, m: 2, s: -3, A: -2 }),
  ohm: si({ kg: 1, m: 2, s: -3, A: -2 }),
  H: si({ kg: 1, m: 2, s: -2, A: -2 }),
  F: si({ kg: -1, m: -2, s: 4, A: 2 }),
  W: si({ kg: 1, m: 2, s: -3 }),
  J: si({ kg: 1, m: 2, s: -2 }),
  N: si({ kg: 1, m: 1, s: -2 }),
  bit: count,
  count,
  counts: count,
  sample: count,
  samples: count,
  tick: count,
  ticks: count,
}

/** SI prefixes as powers of ten. Both micro signs (U+00B5, U+03BC) and the typed `u` are taken. */
export const PREFIXES: Readonly<Record<string, number>> = {
  p: -12, n: -9, µ: -6, μ: -6, u: -6, m: -3, k: 3, M: 6, G: 9,
}
