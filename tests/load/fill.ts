import { createHash, createHmac, randomBytes } from 'node:crypto'
import { join } from 'node:path'
import type { EntityManager } from '@mikro-orm/core'
import { openDatabase } from '../../server/db/orm.ts'
import { Board } from '../../server/modules/boards/board.entity.ts'
import { Change } from '../../server/modules/changes/change.entity.ts'
import { entryHash } from '../../server/modules/ledger/append-entry.ts'
import { LedgerEntry } from '../../server/modules/ledger/ledger-entry.entity.ts'
import { Person } from '../../server/modules/people/person.entity.ts'
import { RoleGrant } from '../../server/modules/people/role-grant.entity.ts'
import { SessionRecord } from '../../server/modules/people/session.entity.ts'
import { ReleaseJoint } from '../../server/modules/releases/release-joint.entity.ts'
import { Release } from '../../server/modules/releases/release.entity.ts'
import { Revision } from '../../server/modules/releases/revision.entity.ts'

/** What the database holds under load. */
export const size = { people: 50, releases: 500, revisions: 10_000, entries: 100_000, boards: 2_000 }

/** A session that is signed in already, as the browser would send it. */
export interface Seat {
  cookie: string
  token: string
  /** name of the person */
  name: string
}

/** express-session's cookie: the id, a dot, its HMAC (cookie-signature). */
const signed = (id: string, secret: string) => `detent=${encodeURIComponent(`s:${id}.${createHmac('sha256', secret).update(id).digest('base64').replace(/=+$/, '')}`)}`

const inPages = async <T extends object>(rows: readonly T[], write: (page: T[]) => Promise<unknown>) => {
  for (let at = 0; at < rows.length; at += 500) await write(rows.slice(at, at + 500))
}

async function seats(em: EntityManager, secret: string, now: Date): Promise<Seat[]> {
  const made: Seat[] = []
  for (let i = 0; i < size.people; i += 1) {
    const person = em.create(Person, { passwordHash: null as never, name: `Engineer ${i + 1}`, email: `engineer.${i + 1}@dunlin.example`, createdAt: now })
    em.create(RoleGrant, { person, role: 'controls engineer', machine: null, grantedAt: now })
    await em.flush()
    const id = randomBytes(24).toString('base64url')
    const token = randomBytes(24).toString('base64url')
    const data = { cookie: { originalMaxAge: 43_200_000, httpOnly: true, path: '/', sameSite: 'lax' }, passport: { user: person.id }, token }
    em.create(SessionRecord, { person, idHash: createHash('sha256').update(id).digest('hex'), data: JSON.stringify(data), createdAt: now, seenAt: now, expiresAt: new Date(now.getTime() + 86_400_000) })
    made.push({ cookie: signed(id, secret), token, name: person.name })
  }
  await em.flush()
  return made
}

/** The first release many times over: the same joints, images and content, the version and number counted on. */
async function releases(em: EntityManager, now: Date) {
  const [first] = await em.find(Release, {}, { populate: ['machine', 'releasedBy', 'content' as never], limit: 1 })
  const joints = await em.find(ReleaseJoint, { release: first }, { populate: ['joint', 'revision', 'image' as never] })
  const perJoint = Math.floor(size.revisions / joints.length)
  let revision = Math.max(...joints.map((j) => j.revision.id))
  const revisions = new Map<number, number[]>(joints.map((j) => [j.joint.id, []]))
  const rows: object[] = []
  for (const j of joints)
    for (let n = 2; n <= perJoint; n += 1) {
      revision += 1
      revisions.get(j.joint.id)!.push(revision)
      rows.push({ id: revision, joint: j.joint.id, number: n, content: j.revision.content, contentHash: createHash('sha256').update(`${j.joint.id} ${n}`).digest('hex'), createdAt: now })
    }
  await inPages(rows, (page) => em.insertMany(Revision, page as never))
  const change = await em.findOneOrFail(Change, { machine: first.machine, number: first.changeNumber })
  for (let n = 2; n <= size.releases; n += 1) {
    await em.insert(Change, { machine: first.machine.id, number: 1000 + n, title: `Change ${n}`, reason: first.reason, state: 'released', author: change.author.id, writers: change.writers, baseRelease: first.id + n - 2, text: change.text, concessions: [], revision: 6, round: 1, contentHash: first.contentHash, createdAt: now, alteredAt: now } as never)
    const id = first.id + n - 1
    await em.insert(Release, {
      id, machine: first.machine.id, version: `1.${n}.0`, sequence: n, changeNumber: 1000 + n, changeTitle: `Change ${n}`, reason: first.reason, set: first.set, content: first.content, contentHash: first.contentHash,
      proposedStep: 'minor', step: 'minor', stepReason: '', releasedBy: first.releasedBy.id, releasedAt: new Date(now.getTime() - (size.releases - n) * 3_600_000),
    } as never)
    await em.insertMany(ReleaseJoint, joints.map((j) => ({ release: id, joint: j.joint.id, revision: revisions.get(j.joint.id)![Math.min(n - 2, perJoint - 2)], image: j.image, imageSha256: j.imageSha256 })) as never)
  }
  first.machine.lastSequence = size.releases
  first.machine.lastChange = 1000 + size.releases
  await em.flush()
  return { machine: first.machine.id, joints: joints.map((j) => j.joint.id), newest: first.id + size.releases - 1 }
}

/** A ledger whose chain holds. */
async function ledger(em: EntityManager, now: Date) {
  const [last] = await em.find(LedgerEntry, {}, { orderBy: { sequence: 'desc' }, limit: 1, disableIdentityMap: true })
  let { sequence, hash: previousHash } = last
  const rows: object[] = []
  while (sequence < size.entries) {
    sequence += 1
    const fields = { sequence, at: new Date(now.getTime() - (size.entries - sequence) * 1000), personId: 1, personName: 'author', act: ['change drafted', 'change submitted', 'release file downloaded', 'flash recorded'][sequence % 4], machineKey: 'dunlin', subject: { machine: 'dunlin', change: `dunlin-${sequence % 900}` }, details: { title: `Entry ${sequence}` }, previousHash }
    const hash = entryHash(fields)
    rows.push({ ...fields, hash })
    previousHash = hash
  }
  await inPages(rows, (page) => em.insertMany(LedgerEntry, page as never))
}

/** Fills the database of a prepared folder with one release up to the size above; nobody serves it meanwhile. */
export async function fill(folder: string, secret: string, now: Date): Promise<Seat[]> {
  const orm = await openDatabase(join(folder, 'detent.sqlite'))
  try {
    return await orm.em.fork().transactional(async (em) => {
      const made = await seats(em, secret, now)
      const { machine, joints, newest } = await releases(em, now)
      await ledger(em, now)
      const boards = Array.from({ length: size.boards }, (_, i) => ({ serial: `HB-${String(i).padStart(5, '0')}`, serialKey: `hb-${String(i).padStart(5, '0')}`, machine, joint: joints[i] ?? null, release: newest - (i % 40), imageOf: joints[i % joints.length], firmware: 'hinge 2.1.0', known: 'recorded', knownAt: now, knownBy: 'author', createdAt: now }))
      await inPages(boards, (page) => em.insertMany(Board, page as never))
      return made
    })
  } finally {
    await orm.close(true)
  }
}
