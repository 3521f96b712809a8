import { DomainError } from '../../http/errors.ts'

const wrong = (name: string, what: string) => new DomainError('invalid-request', `"${name}" in the address ${what}. Nothing was read; correct the address.`)

/** One word of a query, or null when it is not asked. @throws DomainError invalid-request when it is asked twice or too long */
export function readWord(query: Record<string, unknown>, name: string): string | null {
  const value = query[name]
  if (value === undefined || value === '') return null
  if (typeof value !== 'string' || value.length > 120 || value.includes('\0')) throw wrong(name, 'takes one value of at most 120 characters')
  return value
}

/** Where a page ends: the number of the last entry seen. @throws DomainError invalid-request */
export function readBefore(query: Record<string, unknown>): number | null {
  const word = readWord(query, 'before')
  if (word === null) return null
  if (!/^[1-9]\d{0,14}$/.test(word)) throw wrong('before', 'takes the number of an entry')
  return Number(word)
}
