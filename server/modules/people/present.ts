import type { Me } from '../../../shared/contract/people.ts'
import { acts, may, type HeldRole } from './permissions.ts'
import type { Person } from './person.entity.ts'

/** What the person may do, by machine: the client hides by it, the server decides again at each act. */
export function presentMe(person: Person, held: readonly HeldRole[], token: string): Me {
  const machines = [null, ...new Set(held.flatMap((h) => (h.machine === null ? [] : [h.machine])))]
  return {
    id: person.id,
    name: person.name,
    email: person.email,
    roles: held.map((h, id) => ({ id, ...h })),
    acts: Object.fromEntries(machines.map((m) => [m ?? '*', acts.filter((a) => may(held, a, m).allowed)])),
    token,
  }
}
