import { dictionary } from '@zxcvbn-ts/language-common'
import { minPasswordLength } from '../../../shared/contract/people.ts'

/** Passwords people choose, commonest first, lower case; lists of leaked ones, shipped with the package. */
const known: readonly string[] = (dictionary as { passwords: string[] }).passwords

const bareOf = (lower: string) => lower.replaceAll(/[^\p{L}\p{N}]/gu, '') || lower

/** Those that are long enough to be taken, also without the marks between. */
const common = new Set(known.filter((p) => [...p].length >= minPasswordLength).flatMap((p) => [p, bareOf(p)]))
/** Pieces of which two in a row are as common as one. Single characters and pairs say nothing. */
const pieces = new Set(known.slice(0, 3000).filter((p) => p.length >= 3))

const rows = ['abcdefghijklmnopqrstuvwxyz', '01234567890', 'qwertyuiop', 'asdfghjkl', 'zxcvbnm', 'qwertzuiop', 'azertyuiop']
const follows = (a: string, b: string) => a === b || rows.some((row) => row.includes(a + b) || row.includes(b + a))

/** How many runs of neighbours (in the alphabet, among digits, on a keyboard's row, or the same again) a text is made of. */
function runs(text: string): number {
  const characters = [...text]
  return characters.reduce((n, c, i) => (i > 0 && follows(characters[i - 1], c) ? n : n + 1), 0)
}

/** Whether a text is one shorter thing over and over. */
const repeats = (text: string) => (text + text).indexOf(text, 1) < text.length

const twoPieces = (text: string) => Array.from({ length: text.length - 1 }, (_, i) => i + 1).some((at) => pieces.has(text.slice(0, at)) && pieces.has(text.slice(at)))

/** Words that everybody who sees the account knows. */
const contextOf = ({ name, email }: { name: string; email: string }) =>
  [...new Set(['detent', ...`${name} ${email}`.toLowerCase().split(/[^\p{L}\p{N}]+/u)])].filter((word) => [...word].length >= 4).sort((a, b) => b.length - a.length)

/** Fewest characters that a password has besides the words of its account. */
const leastOwn = 8

/**
 * Why a password would be among the first that are tried; null when it would not. Asks for no kinds of characters.
 *
 * @param of  whose it is going to be
 */
export function whyCommon(password: string, of: { name: string; email: string } | null): string | null {
  const lower = password.normalize('NFKC').toLowerCase()
  const bare = bareOf(lower)
  if (common.has(lower) || common.has(bare)) return 'is on the list of common passwords'
  if (twoPieces(bare)) return 'is two common passwords in a row'
  if (repeats(lower) || repeats(bare)) return 'is the same over and over'
  if (runs(bare) <= 3) return 'is a row of the keyboard, the alphabet or digits'
  const own = contextOf(of ?? { name: '', email: '' }).reduce((left, word) => left.replaceAll(word, ''), bare)
  return [...own].length < leastOwn ? 'is little more than the name, the address or the name of this program' : null
}
