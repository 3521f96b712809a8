import { minPasswordLength } from '../../../shared/contract/people.ts'

/** What is wrong with a new password typed twice, field by field; null when nothing is. */
export function newPasswordProblem(next: string, again: string): { field: 'next' | 'again'; words: string } | null {
  const length = [...next].length
  if (length < minPasswordLength) return { field: 'next', words: length === 0 ? 'Choose a password.' : `It has ${length} characters; it takes at least ${minPasswordLength}.` }
  return next === again ? null : { field: 'again', words: again === '' ? 'Write it a second time.' : 'It differs from the first.' }
}

export const passwordHelp = `at least ${minPasswordLength} characters; a few words in a row do well`
