import type { EntityManager } from '@mikro-orm/core'
import { findKinds, type Find, type FindGroup, type FindKind, type SearchAnswer } from '../../../shared/contract/search.ts'
import { Machine } from '../machines/machine.entity.ts'
import { may } from '../people/permissions.ts'
import type { Reader } from '../people/present.ts'
import { findHashes } from './find-hashes.ts'
import { findBoards, findChanges, findPeople, findReleases, type Asking } from './find-stored.ts'
import type { Row } from './release-index.ts'
import { rowsOfFirmware, rowsOfMachines } from './rows-of-machines.ts'
import { fits, readWords, type Words } from './words.ts'

/** Where the first word stands in a name: at its beginning, at a word's, or elsewhere. The rows keep their order otherwise. */
function nearness(name: string, { asked }: Words): number {
  const at = name.toLowerCase().indexOf(asked.toLowerCase())
  return at === 0 ? 0 : at > 0 ? 1 : 2
}

function byName(rows: readonly Row[], words: Words): Map<FindKind, Find[]> {
  const groups = new Map<FindKind, Find[]>()
  const found = rows.filter((row) => fits(row, words.words)).sort((a, b) => nearness(a.name, words) - nearness(b.name, words))
  for (const { kind, name, note, at } of found) groups.set(kind, [...(groups.get(kind) ?? []), { name, note, at }])
  return groups
}

/**
 * Whatever of the workplace the words fit, as far as the reader may read it: names and values in the newest releases, registers, boards,
 * changes, releases, hashes, people.
 *
 * @param most  finds of one kind
 */
export async function searchAll(em: EntityManager, reader: Reader, { text, most }: { text: string; most: number }): Promise<SearchAnswer> {
  const words = readWords(text)
  if (words.words.length === 0) return { asked: words.asked, groups: [] }
  const { held } = reader
  const readable = (await em.find(Machine, {}, { orderBy: { name: 'asc' } })).filter((m) => may(held, 'read', m.key).allowed)
  // Firmware is not tied to a machine: whoever reads anything reads it.
  const readsSomething = may(held, 'read', null).allowed
  const asking: Asking = { em, machines: new Map(readable.map((m) => [m.id, m])), words, most: most + 1 }
  const found = byName([...(await rowsOfMachines(em, readable)), ...(readsSomething ? await rowsOfFirmware(em) : [])], words)
  found.set('board', await findBoards(asking))
  found.set('change', await findChanges(asking))
  found.set('release', await findReleases(asking))
  found.set('hash', await findHashes(asking, held, readsSomething))
  found.set('person', await findPeople(asking, reader))
  return {
    asked: words.asked,
    groups: findKinds.flatMap((kind): FindGroup[] => {
      const finds = found.get(kind) ?? []
      return finds.length === 0 ? [] : [{ kind, finds: finds.slice(0, most), more: finds.length > most }]
    }),
  }
}
