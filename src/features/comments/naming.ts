/** A name being typed after an at sign: where it begins, and what stands there so far. */
export interface Begun {
  from: number
  typed: string
}

/** A name holds a few words at most; further on an at sign is just a sign. */
const LONGEST = 60

/** The name that the caret stands in, if it stands in one. */
export function nameBegun(text: string, caret: number): Begun | null {
  const from = text.lastIndexOf('@', caret - 1)
  if (from < 0 || caret - from > LONGEST) return null
  if (from > 0 && /[\p{L}\p{N}_.]/u.test(text[from - 1])) return null
  const typed = text.slice(from + 1, caret)
  return /\n/.test(typed) ? null : { from, typed }
}

/** People whose name, or a word of it, begins with what is typed. */
export function fitting<T extends { name: string }>(people: readonly T[], typed: string): T[] {
  const wanted = typed.toLocaleLowerCase('en-GB')
  return people.filter(({ name }) => {
    const lower = name.toLocaleLowerCase('en-GB')
    return lower !== wanted && (lower.startsWith(wanted) || lower.split(' ').some((word) => word.startsWith(wanted)))
  })
}

/** The text with the name written out, and the caret behind it. */
export function named(text: string, { from, typed }: Begun, name: string): { text: string; caret: number } {
  const rest = text.slice(from + 1 + typed.length)
  const head = `${text.slice(0, from)}@${name}`
  const gap = /^[\s.,;:!?)]/.test(rest) ? '' : ' '
  return { text: `${head}${gap}${rest}`, caret: head.length + (gap || rest.startsWith(' ') ? 1 : 0) }
}

/** Pieces of a text: plain, and the people it names. */
export function pieces(text: string, names: readonly string[]): { text: string; named: boolean }[] {
  if (names.length === 0) return [{ text, named: false }]
  const longestFirst = names.toSorted((a, b) => b.length - a.length).map((n) => n.replaceAll(/[.*+?^${}()|[\]\\]/g, '\\$&'))
  const at = new RegExp(`(@(?:${longestFirst.join('|')})(?![\\p{L}\\p{N}_]))`, 'giu')
  return text.split(at).flatMap((part, i) => (part === '' ? [] : [{ text: part, named: i % 2 === 1 }]))
}
