import type { ParameterSchema, Word } from '../../../shared/registers/parameter-schema.ts'

/** What fills a stretch of one row: (a part of) a word, or bytes that belong to none. */
export interface Stretch {
  word: Word | null
  /** register address of its first byte, and how many bytes of it lie in this row */
  address: number
  bytes: number
  /** the word began in the row before, or goes on in the next */
  continued: boolean
  continues: boolean
}

export type AddressRow = { kind: 'bytes'; address: number; stretches: Stretch[] } | { kind: 'free'; address: number; bytes: number }

export const bytesInRow = 16

/**
 * The image's address space in rows of sixteen bytes, each word where and as long as it is. Two or more rows that no word
 * touches are told as one.
 */
export function addressRows({ image, words }: Pick<ParameterSchema, 'image' | 'words'>): AddressRow[] {
  const end = image.base + image.length
  const rows: AddressRow[] = []
  let next = 0
  for (let row = image.base - (image.base % bytesInRow); row < end; row += bytesInRow) {
    const [from, to] = [Math.max(row, image.base), Math.min(row + bytesInRow, end)]
    while (next < words.length && words[next].address + words[next].bytes <= from) next += 1
    const inside: Word[] = []
    for (let i = next; i < words.length && words[i].address < to; i += 1) inside.push(words[i])
    const last = rows.at(-1)
    if (inside.length > 0) rows.push({ kind: 'bytes', address: row, stretches: stretchesOf(inside, from, to) })
    else if (last?.kind === 'free') last.bytes += to - from
    else rows.push({ kind: 'free', address: from, bytes: to - from })
  }
  return rows
}

function stretchesOf(words: readonly Word[], from: number, to: number): Stretch[] {
  const free = (address: number, bytes: number): Stretch => ({ word: null, address, bytes, continued: false, continues: false })
  const stretches: Stretch[] = []
  let at = from
  for (const word of words) {
    const [start, end] = [Math.max(word.address, from), Math.min(word.address + word.bytes, to)]
    if (start > at) stretches.push(free(at, start - at))
    stretches.push({ word, address: start, bytes: end - start, continued: start > word.address, continues: end < word.address + word.bytes })
    at = end
  }
  if (at < to) stretches.push(free(at, to - at))
  return stretches
}

/** What a word is called on the map. */
export function wordName(word: Word): string {
  if (word.kind === 'checksum') return 'checksum'
  if (word.kind === 'layout-id') return 'layout id'
  if (word.kind === 'release') return 'release number'
  return word.parameters.map((p) => p.title || p.name).join(', ')
}
