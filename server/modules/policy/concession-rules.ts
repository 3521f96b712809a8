import type { ConcessionRequest } from '../../../shared/contract/changes.ts'
import type { PolicyContent } from '../../../shared/contract/policy.ts'
import type { FieldProblem } from '../../http/errors.ts'

const DAY = 86_400_000

/** The last day that a concession asked for today may hold, as YYYY-MM-DD. */
export const lastDayOf = (longestDays: number, now: Date): string => new Date(now.getTime() + longestDays * DAY).toISOString().slice(0, 10)

/** What of the concessions asked for goes beyond the policy's rules, or has ended already: pointers into the change. */
export function concessionProblems(requests: readonly ConcessionRequest[], { concession: rules }: Pick<PolicyContent, 'concession'>, now: Date): FieldProblem[] {
  const today = now.toISOString().slice(0, 10)
  return requests.flatMap((c, k) => {
    const problem = (field: 'until' | 'count', detail: string): FieldProblem[] => [{ pointer: `/concessions/${k}/${field}`, detail: `${c.characteristic}: ${detail}` }]
    if (c.until !== null && c.until < today) return problem('until', `its last day, ${c.until}, has passed`)
    if (rules && c.until !== null && c.until > lastDayOf(rules.longestDays, now)) return problem('until', `policy lets a concession hold ${rules.longestDays} days at most, until ${lastDayOf(rules.longestDays, now)}`)
    if (rules && c.count !== null && c.count > rules.mostBoards) return problem('count', `policy lets a concession cover ${rules.mostBoards} boards at most`)
    return []
  })
}
