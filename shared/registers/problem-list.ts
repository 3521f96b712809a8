import type { SchemaProblem } from './parameter-schema.ts'

export type Json = Readonly<Record<string, unknown>>

export const isObject = (value: unknown): value is Json =>
  typeof value === 'object' && value !== null && !Array.isArray(value)

/** One step further along a JSON pointer (RFC 6901). */
export const under = (pointer: string, key: string | number): string => {
  const step = String(key)
  return /[~/]/.test(step) ? `${pointer}/${step.replaceAll('~', '~0').replaceAll('/', '~1')}` : `${pointer}/${step}`
}

/** A value as it may stand in a message: short, and in JSON. */
export function shown(value: unknown): string {
  if (typeof value === 'number') return String(value)
  const text = JSON.stringify(value) ?? String(value)
  return text.length > 60 ? `${text.slice(0, 57)}…` : text
}

/** Most problems told at once: a map with ten thousand faults is answered with the first of them. */
export const MAX_PROBLEMS = 200

/** Collects what is wrong with a schema, in the order met. */
export class ProblemList {
  readonly problems: SchemaProblem[] = []
  readonly advice: SchemaProblem[] = []

  add(pointer: string, code: string, message: string): void {
    if (this.problems.length < MAX_PROBLEMS) this.problems.push({ pointer, code, message })
  }

  advise(pointer: string, code: string, message: string): void {
    if (this.advice.length < MAX_PROBLEMS) this.advice.push({ pointer, code, message })
  }

  /** Reads the integer under a key, within limits; says so and returns null when it is none. (Pointers are written only for a problem: a large map has a hundred thousand values.) */
  integer(object: Json, key: string, at: string, low: number, high: number): number | null {
    const value = object[key]
    if (typeof value === 'number' && Number.isInteger(value) && value >= low && value <= high) return value
    this.add(under(at, key), 'not-in-range', `${shown(value)} is no whole number from ${low} to ${high}.`)
    return null
  }

  /** Reads one of a few words under a key. */
  oneOf<T extends string | number>(object: Json, key: string, at: string, words: readonly T[]): T | null {
    const value = object[key]
    if ((words as readonly unknown[]).includes(value)) return value as T
    this.add(under(at, key), 'not-a-choice', `${shown(value)} is none of ${words.join(', ')}.`)
    return null
  }

  /** Reads an optional text under a key. */
  text(object: Json, key: string, at: string): string {
    const value = object[key]
    if (value === undefined) return ''
    if (typeof value === 'string' && value.length <= 2000) return value
    this.add(under(at, key), 'not-a-text', `${shown(value)} is no text of at most 2000 characters.`)
    return ''
  }

  /** Refuses every key that is not in the list. */
  onlyKeys(object: Json, pointer: string, keys: ReadonlySet<string>): void {
    for (const key in object) {
      if (!keys.has(key)) this.add(under(pointer, key), 'unknown-key', `“${key}” is not known here.`)
    }
  }
}
