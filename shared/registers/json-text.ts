import { heldByDouble } from './rational.ts'

export type JsonReading =
  | { readonly kind: 'json'; readonly value: unknown }
  | { readonly kind: 'refused'; readonly message: string; readonly line: number; readonly column: number }

export interface JsonLimits {
  /** Longest text, in characters. */
  readonly length: number
  readonly depth: number
}

export const DEFAULT_LIMITS: JsonLimits = { length: 8_000_000, depth: 64 }

class Refusal extends Error {
  readonly at: number
  constructor(at: number, message: string) {
    super(message)
    this.at = at
  }
}

const NUMBER = /-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?/y
const ESCAPES: Readonly<Record<string, string>> = { '"': '"', '\\': '\\', '/': '/', b: '\b', f: '\f', n: '\n', r: '\r', t: '\t' }

/**
 * Reads JSON with comments, without losing a digit.
 *
 * A number whose decimal a double does not hold comes back as its text; a key that stands twice in an object,
 * nesting beyond the limit and anything after the value are refused with their place.
 *
 * @source RFC 8259; `//` and block comments are taken besides
 */
export function readJsonText(text: string, limits: JsonLimits = DEFAULT_LIMITS): JsonReading {
  if (text.length > limits.length) {
    return { kind: 'refused', message: `The text has ${text.length} characters; ${limits.length} are the most that is read.`, line: 1, column: 1 }
  }
  const reader = new Reader(text, limits.depth)
  try {
    return { kind: 'json', value: reader.whole() }
  } catch (error) {
    if (!(error instanceof Refusal)) throw error
    return { kind: 'refused', message: error.message, ...placeOf(text, error.at) }
  }
}

/** 1-based line and column of an offset. */
export function placeOf(text: string, at: number): { line: number; column: number } {
  const before = text.slice(0, at)
  const lines = before.split(/\r\n|\r|\n/)
  return { line: lines.length, column: lines[lines.length - 1].length + 1 }
}

class Reader {
  private at = 0
  private readonly text: string
  private readonly maxDepth: number

  constructor(text: string, maxDepth: number) {
    this.text = text
    this.maxDepth = maxDepth
    if (text.charCodeAt(0) === 0xfeff) this.at = 1
  }

  whole(): unknown {
    const value = this.value(0)
    this.space()
    if (this.at < this.text.length) throw new Refusal(this.at, 'Something follows the end of the JSON value.')
    return value
  }

  private value(depth: number): unknown {
    if (depth > this.maxDepth) throw new Refusal(this.at, `The text is nested deeper than ${this.maxDepth} levels.`)
    this.space()
    const c = this.text[this.at]
    if (c === '{') return this.object(depth)
    if (c === '[') return this.array(depth)
    if (c === '"') return this.string()
    if (c === 't') return this.word('true', true)
    if (c === 'f') return this.word('false', false)
    if (c === 'n') return this.word('null', null)
    return this.number()
  }

  private object(depth: number): Record<string, unknown> {
    const object: Record<string, unknown> = {}
    this.at += 1
    if (this.ends('}')) return object
    for (;;) {
      this.space()
      const start = this.at
      if (this.text[start] !== '"') throw new Refusal(start, 'A key in double quotes is expected here.')
      const key = this.string()
      // no value of JSON is undefined: the dearer question is asked of inherited names and doubles alone
      if (object[key] !== undefined && Object.hasOwn(object, key)) throw new Refusal(start, `The key ${JSON.stringify(key)} stands twice in this object.`)
      this.space()
      if (this.text[this.at] !== ':') throw new Refusal(this.at, 'A colon is expected here.')
      this.at += 1
      const value = this.value(depth + 1)
      // plain assignment of this one name would set the prototype instead
      if (key === '__proto__') Object.defineProperty(object, key, { value, enumerable: true, configurable: true, writable: true })
      else object[key] = value
      if (this.ends('}')) return object
      this.comma()
    }
  }

  private array(depth: number): unknown[] {
    const array: unknown[] = []
    this.at += 1
    if (this.ends(']')) return array
    for (;;) {
      array.push(this.value(depth + 1))
      if (this.ends(']')) return array
      this.comma()
    }
  }

  private ends(mark: string): boolean {
    this.space()
    if (this.text[this.at] !== mark) return false
    this.at += 1
    return true
  }

  private comma(): void {
    if (this.text[this.at] !== ',') throw new Refusal(this.at, this.at < this.text.length ? 'A comma is expected here.' : 'The text ends in the middle.')
    this.at += 1
  }

  private word(word: string, value: unknown): unknown {
    if (!this.text.startsWith(word, this.at)) throw new Refusal(this.at, 'This is no JSON value.')
    this.at += word.length
    return value
  }

  private number(): number | string {
    const whole = this.shortWhole()
    if (whole >= 0) return whole
    NUMBER.lastIndex = this.at
    const match = NUMBER.exec(this.text)
    if (!match) throw new Refusal(this.at, this.at < this.text.length ? 'This is no JSON value.' : 'The text ends in the middle.')
    this.at += match[0].length
    if (/[\w.]/.test(this.text[this.at] ?? '')) throw new Refusal(this.at, 'This is no JSON number.')
    // up to 15 digits without exponent are always held (IEEE 754: 15 significant decimals survive binary64)
    if (match[0].length <= 15 && !/e/i.test(match[0])) return Number(match[0])
    return heldByDouble(match[0]) ? Number(match[0]) : match[0]
  }

  /** A whole number of up to nine digits, the commonest kind; −1 for anything else, which nothing was read of. */
  private shortWhole(): number {
    const { text } = this
    let end = this.at
    let value = 0
    let code = text.charCodeAt(end)
    while (code >= 48 && code <= 57 && end - this.at < 10) {
      value = value * 10 + code - 48
      code = text.charCodeAt((end += 1))
    }
    const length = end - this.at
    const ends = code === 44 || code === 125 || code === 93 || code === 32 || code === 10 || code === 13
    if (length === 0 || length > 9 || !ends || (length > 1 && text.charCodeAt(this.at) === 48)) return -1
    this.at = end
    return value
  }

  private string(): string {
    const { text } = this
    let start = this.at + 1
    let result = ''
    for (let k = start; k < text.length; k += 1) {
      const code = text.charCodeAt(k)
      if (code === 34) {
        this.at = k + 1
        return result + text.slice(start, k)
      }
      if (code < 32) throw new Refusal(k, 'A control character stands in a text.')
      if (code === 92) {
        result += text.slice(start, k) + this.escape(k)
        k += text[k + 1] === 'u' ? 5 : 1
        start = k + 1
      }
    }
    throw new Refusal(this.at, 'This text has no closing quote.')
  }

  private escape(k: number): string {
    const letter = this.text[k + 1]
    if (letter === 'u') {
      const digits = this.text.slice(k + 2, k + 6)
      if (/^[0-9a-fA-F]{4}$/.test(digits)) return String.fromCharCode(parseInt(digits, 16))
    } else if (letter !== undefined && Object.hasOwn(ESCAPES, letter)) return ESCAPES[letter]
    throw new Refusal(k, 'This escape is not known in JSON.')
  }

  private space(): void {
    for (;;) {
      const code = this.text.charCodeAt(this.at)
      if (code === 32 || code === 10 || code === 13 || code === 9) this.at += 1
      else if (code === 47) this.comment()
      else return
    }
  }

  private comment(): void {
    const next = this.text[this.at + 1]
    if (next === '/') {
      const end = this.text.indexOf('\n', this.at)
      this.at = end < 0 ? this.text.length : end
    } else if (next === '*') {
      const end = this.text.indexOf('*/', this.at + 2)
      if (end < 0) throw new Refusal(this.at, 'This comment has no end.')
      this.at = end + 2
    } else throw new Refusal(this.at, 'This is no JSON value.')
  }
}
