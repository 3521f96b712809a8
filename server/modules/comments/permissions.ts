import type { Allowed } from '../../../shared/contract/people.ts'
import type { Change } from '../changes/change.entity.ts'
import { inState } from '../changes/permissions.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import type { Comment } from './comment.entity.ts'

const no = (why: string): Allowed => ({ allowed: false, why })

/** Comments are written while a change is under way. */
export function mayComment(change: Change, held: readonly HeldRole[]): Allowed {
  const role = may(held, 'comment', change.machine.key)
  return role.allowed ? inState(change, 'draft', 'submitted', 'approved') : role
}

/** Who wrote a comment, or a reviewer who took no part in the change, says that it is answered. */
export function mayMarkAnswered(comment: Comment, answered: boolean, { change, person, held }: { change: Change; person: Person; held: readonly HeldRole[] }): Allowed {
  if (comment.under !== null && comment.under !== undefined) return no(`It stands under comment ${comment.under}, and is answered with it.`)
  if (answered) return no('It is marked answered already.')
  const commenting = mayComment(change, held)
  if (!commenting.allowed) return commenting
  if (comment.person.id === person.id) return { allowed: true }
  if (change.writers.includes(person.id)) return no(`You wrote in this change: ${comment.personName}, who wrote the comment, or a reviewer marks it answered.`)
  return may(held, 'return changes', change.machine.key).allowed ? { allowed: true } : no(`${comment.personName}, who wrote it, or a reviewer marks it answered.`)
}
