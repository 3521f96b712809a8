import { longestAsked } from '../../../shared/contract/search.ts'

/** What was asked for, read once. */
export interface Words {
  /** as it was asked, spaces made single */
  asked: string
  /** lower case; a find holds every one of them */
  words: readonly Word[]
  /** hex digits that a hash may begin with; null when it can't be one */
  hash: string | null
  /** the whole text in lower case, as a serial number is typed */
  serial: string
}

export interface Word {
  text: string
  /** the number it says, where it says one: values are found by it, not by its digits */
  number: number | null
  /** the address it says, written as 0x33 */
  address: number | null
}

const fewestHashDigits = 4

function wordOf(text: string): Word {
  const address = /^0x[0-9a-f]{1,8}$/.test(text) ? Number.parseInt(text.slice(2), 16) : null
  const plain = text.replaceAll('−', '-')
  const number = /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/.test(plain) ? Number(plain) : null
  return { text, number: Number.isFinite(number) ? number : null, address }
}

/** Reads a search: words, numbers, addresses, and the beginning of a hash, typed in one piece or in groups of four as it is shown. */
export function readWords(typed: string): Words {
  const asked = typed.slice(0, longestAsked).trim().replaceAll(/\s+/g, ' ')
  const lower = asked.toLowerCase()
  const joined = lower.replaceAll(' ', '')
  const grouped = /^[0-9a-f]{4}( [0-9a-f]{1,4})*$/.test(lower)
  const hash = joined.length >= fewestHashDigits && joined.length <= 64 && /^[0-9a-f]+$/.test(joined) && (grouped || !lower.includes(' ')) ? joined : null
  return { asked, words: lower === '' ? [] : lower.split(' ').map(wordOf), hash, serial: lower }
}

/** What a row can be found by. */
export interface Findable {
  /** lower case */
  text: string
  numbers?: readonly number[]
  addresses?: readonly number[]
}

const holds = (row: Findable, word: Word): boolean => {
  if (word.address !== null) return row.addresses?.includes(word.address) ?? false
  if (word.number !== null && row.numbers?.includes(word.number)) return true
  // A number is not looked for inside another one: 3.2 does not find 13.25.
  return word.number === null ? row.text.includes(word.text) : row.text.split(/[\s,]+/).includes(word.text)
}

export const fits = (row: Findable, words: readonly Word[]): boolean => words.every((word) => holds(row, word))

/** `%` and `_` stand for themselves; used with `escape '\'`. */
export const likeText = (text: string) => text.replaceAll(/[\\%_]/g, (c) => `\\${c}`)
