import { combine, NO_DIMENSION, type Dimension } from './dimension.ts'
import { PREFIXES, UNITS, type NamedUnit } from './unit-table.ts'
import { divide, multiply, tenTo, type Rational } from '../registers/rational.ts'

/** A unit in SI terms: one of it is `factor`·π^`pi` of the SI unit, above a zero point (°C alone). */
export interface Unit {
  readonly text: string
  readonly dimension: Dimension
  readonly factor: Rational
  readonly pi: number
  readonly zero: string | null
}

const ONE: Rational = { n: 1n, d: 1n }
const SUPERSCRIPTS: Readonly<Record<string, string>> = {
  '⁻': '-', '⁰': '0', '¹': '1', '²': '2', '³': '3', '⁴': '4', '⁵': '5', '⁶': '6', '⁷': '7', '⁸': '8', '⁹': '9',
}
const TOKEN = /([·*⋅/()])|([A-Za-z\u00b5\u03bc\u03a9\u2126%°]+|1)(?:\^?(-?\d)|([⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+))?/y
const CACHE = new Map<string, Unit | null>()

/**
 * Reads a unit such as `A·s/rad`, `V/(A·s)`, `1/s²`, `mA`, `deg/s`, `kg·m^2`.
 *
 * `·` and `*` multiply, `/` divides by the next factor alone (`V/A/s` and `V/(A·s)` are the same), a bracket groups.
 *
 * @returns the unit, or null when the text is none
 */
export function parseUnit(text: string): Unit | null {
  const known = CACHE.get(text)
  if (known !== undefined) return known
  const read = text.length > 40 ? null : readUnit(text)
  if (read && CACHE.size < 500) CACHE.set(text, read)
  return read
}

interface Product { dimension: Dimension; factor: Rational; pi: number; zero: string | null; factors: number }

function readUnit(text: string): Unit | null {
  const tokens = tokensOf(text)
  if (!tokens || tokens.length === 0) return null
  const state = { at: 0 }
  const product = readProduct(tokens, state, 0)
  if (!product || state.at !== tokens.length) return null
  // a zero point has a meaning for the bare unit only: V/°C is a step, not a temperature
  const zero = product.factors === 1 ? product.zero : null
  return { text, dimension: product.dimension, factor: product.factor, pi: product.pi, zero }
}

interface Token { mark: string; name: string; power: number }

function tokensOf(text: string): Token[] | null {
  const tokens: Token[] = []
  TOKEN.lastIndex = 0
  while (TOKEN.lastIndex < text.length) {
    const match = TOKEN.exec(text)
    if (!match) return null
    const raised = match[3] ?? (match[4] ? [...match[4]].map((c) => SUPERSCRIPTS[c]).join('') : '1')
    if (!/^-?\d$/.test(raised) || (match[2] === '1' && raised !== '1')) return null
    tokens.push({ mark: match[1] ?? '', name: match[2] ?? '', power: Number(raised) })
  }
  return tokens
}

function readProduct(tokens: Token[], state: { at: number }, depth: number): Product | null {
  let result: Product = { dimension: NO_DIMENSION, factor: ONE, pi: 0, zero: null, factors: 0 }
  let sign = 1
  for (;;) {
    const factor = readFactor(tokens, state, depth)
    if (!factor) return null
    result = times(result, factor, sign)
    const next = tokens[state.at]?.mark
    if (next === undefined || next === ')') return result
    if (next !== '/' && next !== '·' && next !== '*' && next !== '⋅') return null
    sign = next === '/' ? -1 : 1
    state.at += 1
  }
}

function readFactor(tokens: Token[], state: { at: number }, depth: number): Product | null {
  const token = tokens[state.at]
  if (!token || depth > 4) return null
  state.at += 1
  if (token.mark === '(') {
    const inner = readProduct(tokens, state, depth + 1)
    if (!inner || tokens[state.at]?.mark !== ')') return null
    state.at += 1
    return inner
  }
  const unit = token.name ? named(token.name) : null
  if (!unit) return null
  let result: Product = { dimension: NO_DIMENSION, factor: ONE, pi: 0, zero: null, factors: 0 }
  for (let k = 0; k < Math.abs(token.power); k += 1) result = times(result, unit, Math.sign(token.power))
  return token.power === 1 ? unit : { ...result, factors: 2 }
}

function named(name: string): Product | null {
  const own = Object.hasOwn(UNITS, name) ? UNITS[name] : undefined
  if (own) return asProduct(own, 0)
  const prefix = PREFIXES[name[0]]
  const rest = name.slice(1)
  const unit = Object.hasOwn(UNITS, rest) ? UNITS[rest] : undefined
  return prefix !== undefined && unit?.prefixed ? asProduct(unit, prefix) : null
}

function asProduct(unit: NamedUnit, tens: number): Product {
  const base: Rational = { n: unit.factor[0], d: unit.factor[1] }
  const factor = tens >= 0 ? multiply(base, { n: tenTo(tens), d: 1n }) : divide(base, { n: tenTo(-tens), d: 1n })
  return { dimension: unit.dimension, factor, pi: unit.pi, zero: unit.zero ?? null, factors: 1 }
}

const times = (a: Product, b: Product, sign: number): Product => ({
  dimension: combine(a.dimension, b.dimension, sign),
  factor: sign > 0 ? multiply(a.factor, b.factor) : divide(a.factor, b.factor),
  pi: a.pi + sign * b.pi,
  zero: b.zero ?? a.zero,
  factors: a.factors + b.factors,
})
