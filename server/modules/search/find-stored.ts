import type { EntityManager } from '@mikro-orm/core'
import type { SqlEntityManager } from '@mikro-orm/sqlite'
import type { Find } from '../../../shared/contract/search.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { presentPeople, type Reader } from '../people/present.ts'
import { Person } from '../people/person.entity.ts'
import { likeText, type Words } from './words.ts'

export interface Asking {
  em: EntityManager
  /** machines that the reader may read, by id */
  machines: ReadonlyMap<number, Machine>
  words: Words
  /** finds wanted, one more tells that there are more */
  most: number
}

export async function ask<T>(em: EntityManager, sql: string, values: (string | number)[]): Promise<T[]> {
  return (await (em as SqlEntityManager).getConnection().execute(sql, values)) as T[]
}

export const placesOf = (machines: ReadonlyMap<number, unknown>) => [...machines.keys()].map(() => '?').join(', ')

/** The end of a range of texts that begin alike: the next text after all of them. */
const after = (prefix: string) => `${prefix}\uffff`

/** Boards by the beginning of their serial number, from its index; by any part of it when nothing begins like that. */
export async function findBoards({ em, machines, words, most }: Asking): Promise<Find[]> {
  if (machines.size === 0) return []
  type Hit = { serial: string; machine: number; joint: string | null; retired: string | null }
  const select = `select b.serial, b.machine_id as machine, j.name as joint, b.retired_at as retired from board b left join joint j on j.id = b.joint_id where b.machine_id in (${placesOf(machines)}) and`
  const ids = [...machines.keys()]
  let hits = await ask<Hit>(em, `${select} b.serial_key >= ? and b.serial_key < ? order by b.serial_key limit ?`, [...ids, words.serial, after(words.serial), most])
  if (hits.length === 0 && words.serial.length >= 2) hits = await ask<Hit>(em, `${select} b.serial_key like ? escape '\\' order by b.serial_key limit ?`, [...ids, `%${likeText(words.serial)}%`, most])
  return hits.map((h) => ({ name: h.serial, note: `${h.retired === null ? (h.joint === null ? 'off its joint' : `at ${h.joint}`) : 'retired'}, ${machines.get(h.machine)!.name}`, at: { page: 'board', serial: h.serial } }))
}

/** Each machine with the words that its own name does not say. */
function narrowed(machines: ReadonlyMap<number, Machine>, words: Words) {
  return [...machines.values()].map((machine) => {
    const own = `${machine.name} ${machine.key}`.toLowerCase().split(/\s+/)
    return { machine, left: words.words.map((w) => w.text).filter((w) => !own.includes(w)) }
  })
}

/** Changes by number and title. */
export async function findChanges({ em, machines, words, most }: Asking): Promise<Find[]> {
  const finds: Find[] = []
  for (const { machine, left } of narrowed(machines, words)) {
    const called = new RegExp(`^${machine.key.toLowerCase()}-(\\d{1,9})$`)
    const parts = left.map((w): [string, (string | number)[]] => {
      const number = called.exec(w)?.[1] ?? (/^\d{1,9}$/.test(w) ? w : null)
      return number === null ? ["c.title like ? escape '\\'", [`%${likeText(w)}%`]] : ["(c.number = ? or c.title like ? escape '\\')", [Number(number), `%${likeText(w)}%`]]
    })
    type Hit = { number: number; title: string; state: string; author: string }
    const hits = await ask<Hit>(em, `select c.number, c.title, c.state, p.name as author from \`change\` c join person p on p.id = c.author_id where ${['c.machine_id = ?', ...parts.map(([sql]) => sql)].join(' and ')} order by c.number desc limit ?`, [machine.id, ...parts.flatMap(([, values]) => values), most])
    for (const h of hits) finds.push({ name: h.title, note: `${machine.name} ${h.number}, ${h.state}, by ${h.author}`, at: { page: 'change', change: `${machine.key}-${h.number}`, draft: h.state === 'draft' } })
  }
  return finds
}

/** Releases by version and title. */
export async function findReleases({ em, machines, words, most }: Asking): Promise<Find[]> {
  const finds: Find[] = []
  for (const { machine, left } of narrowed(machines, words)) {
    const parts = left.map((w): [string, string[]] => ["(r.version like ? escape '\\' or r.change_title like ? escape '\\')", [`${likeText(w)}%`, `%${likeText(w)}%`]])
    type Hit = { version: string; title: string; withdrawn: number | null }
    const hits = await ask<Hit>(em, `select r.version, r.change_title as title, w.id as withdrawn from \`release\` r left join withdrawal w on w.release_id = r.id where ${['r.machine_id = ?', ...parts.map(([sql]) => sql)].join(' and ')} order by r.sequence desc limit ?`, [machine.id, ...parts.flatMap(([, values]) => values), most])
    for (const h of hits) finds.push({ name: `${machine.name} ${h.version}`, note: `${h.withdrawn === null ? '' : 'withdrawn, '}${h.title}`, at: { page: 'release', machine: machine.key, version: h.version } })
  }
  return finds
}

/** People by name, and by their address for whoever keeps people; those out of the reader's sight are left out. */
export async function findPeople({ em, words, most }: Asking, reader: Reader): Promise<Find[]> {
  const like = (text: string) => ({ $like: `%${likeText(text)}%` })
  const some = await em.find(Person, { $and: words.words.map((w) => ({ $or: [{ name: like(w.text) }, { email: like(w.text) }] })) }, { populate: ['passwordHash'], orderBy: { name: 'asc' }, limit: 200 })
  const seen = (await presentPeople(em, some, reader)).filter((p) => words.words.every((w) => `${p.name} ${p.email ?? ''}`.toLowerCase().includes(w.text)))
  return seen.slice(0, most).map((p) => ({ name: p.name, note: [...new Set(p.roles.map((r) => r.role))].join(', ') || p.state, at: { page: 'person', person: p.id } }))
}
