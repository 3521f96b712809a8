/** Powers of ten that a double holds exactly. */
const TEN = Array.from({ length: 23 }, (_, k) => Number(`1e${k}`))
const [ZERO, NINE, PLUS, MINUS, QUOTE, SPACE, TAB] = [48, 57, 43, 45, 34, 32, 9]

/**
 * A number in bytes [from, to), blanks and quotes around it left out; NaN when it is none.
 *
 * Up to 15 digits with a power of ten up to 22 come out correctly rounded by one multiplication or division (Clinger 1990, from memory);
 * longer ones go the slow way.
 */
export function parseNumber(bytes: Uint8Array, from: number, to: number, point: number): number {
  while (from < to && (bytes[from] === SPACE || bytes[from] === TAB || bytes[from] === QUOTE)) from++
  while (to > from && (bytes[to - 1] === SPACE || bytes[to - 1] === TAB || bytes[to - 1] === QUOTE)) to--
  let k = from
  let negative = false
  if (bytes[k] === MINUS || bytes[k] === PLUS) negative = bytes[k++] === MINUS
  let digits = 0
  let value = 0
  let scale = 0
  for (; k < to && bytes[k] >= ZERO && bytes[k] <= NINE; k++, digits++) value = value * 10 + bytes[k] - ZERO
  if (k < to && bytes[k] === point) for (k++; k < to && bytes[k] >= ZERO && bytes[k] <= NINE; k++, digits++, scale++) value = value * 10 + bytes[k] - ZERO
  if (digits === 0) return NaN
  if (k === to && digits <= 15 && scale <= 22) return (negative ? -value : value) / TEN[scale]
  return slowly(bytes, from, to, point)
}

const whole = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/

function slowly(bytes: Uint8Array, from: number, to: number, point: number): number {
  if (to - from > 60) return NaN
  let text = ''
  for (let k = from; k < to; k++) text += String.fromCharCode(bytes[k] === point ? 46 : bytes[k])
  return whole.test(text) ? Number(text) : NaN
}
