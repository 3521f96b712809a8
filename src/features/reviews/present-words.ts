import type { PresencePage, Present } from '../../../shared/contract/presence.ts'

const places: Record<PresencePage, string> = { values: 'at the values', check: 'at the check', review: 'at the review' }

/** "Tobias Oyelaran at the values and at the review, Ingunn Veblen at the check". */
export function presentWords(present: readonly Present[]): string {
  const people = new Map<string, string[]>()
  for (const { name, page } of present) people.set(name, [...(people.get(name) ?? []), places[page]])
  return [...people].map(([name, at]) => `${name} ${at.join(' and ')}`).join(', ')
}
