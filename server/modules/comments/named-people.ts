import type { EntityManager } from '@mikro-orm/core'
import { heldRoles } from '../people/held-roles.ts'
import { may } from '../people/permissions.ts'
import { Person } from '../people/person.entity.ts'

/** After a name the word ends: "@Ann" does not name Anna. */
const wordEnds = (text: string, at: number) => at >= text.length || !/[\p{L}\p{N}_]/u.test(text[at])

/**
 * People named in a text, as "@Rafiq Sandoval": those who may read the machine, each once.
 *
 * Where one name begins another, the longer one that fits is meant.
 */
export async function namedPeople(em: EntityManager, text: string, machine: string): Promise<Person[]> {
  const signs = [...text.matchAll(/@/g)].map((m) => m.index + 1)
  if (signs.length === 0) return []
  const people = (await em.find(Person, { disabledAt: null }, { orderBy: { id: 'asc' } })).toSorted((a, b) => b.name.length - a.name.length)
  const found = new Map<number, Person>()
  for (const at of signs) {
    const [longest] = people.filter((p) => text.slice(at, at + p.name.length).toLocaleLowerCase('en-GB') === p.name.toLocaleLowerCase('en-GB') && wordEnds(text, at + p.name.length))
    if (longest) for (const p of people) if (p.name === longest.name) found.set(p.id, p)
  }
  const readers = await Promise.all([...found.values()].map(async (p) => ((may(await heldRoles(em, p), 'read', machine).allowed ? [p] : []))))
  return readers.flat()
}
