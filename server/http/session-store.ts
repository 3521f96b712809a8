import { createHash } from 'node:crypto'
import { Store, type SessionData } from 'express-session'
import { Person } from '../modules/people/person.entity.ts'
import { SessionRecord } from '../modules/people/session.entity.ts'
import type { Services } from './services.ts'

export const hashOf = (secret: string) => createHash('sha256').update(secret).digest('hex')

/** Idle and absolute limits of a session. */
export const idleMs = 12 * 3600_000
export const absoluteMs = 7 * 24 * 3600_000
/** `seenAt` is written at most this often, so that reading does not write. */
const seenEveryMs = 60_000

type Done = (error?: unknown, session?: SessionData | null) => void

/** Server-side sessions in the database. */
export class DatabaseSessionStore extends Store {
  private readonly services: Services
  constructor(services: Services) {
    super()
    this.services = services
  }

  override get(id: string, done: Done) {
    this.read(id).then((s) => done(null, s), done)
  }

  override set(id: string, data: SessionData, done: Done = () => {}) {
    this.write(id, data).then(() => done(), done)
  }

  override destroy(id: string, done: Done = () => {}) {
    this.services.orm.em.fork().nativeDelete(SessionRecord, { idHash: hashOf(id) }).then(() => done(), done)
  }

  private async read(id: string): Promise<SessionData | null> {
    const em = this.services.orm.em.fork()
    const record = await em.findOne(SessionRecord, { idHash: hashOf(id) })
    const now = this.services.now()
    if (!record || record.expiresAt <= now || now.getTime() - record.seenAt.getTime() > idleMs) return null
    if (now.getTime() - record.seenAt.getTime() > seenEveryMs) {
      record.seenAt = now
      await em.flush()
    }
    return JSON.parse(record.data) as SessionData
  }

  private async write(id: string, data: SessionData) {
    const em = this.services.orm.em.fork()
    const now = this.services.now()
    const personId = (data as SessionData & { passport?: { user?: number } }).passport?.user
    const person = personId === undefined ? null : em.getReference(Person, personId)
    const fields = { person, data: JSON.stringify(data), seenAt: now }
    const record = await em.findOne(SessionRecord, { idHash: hashOf(id) })
    if (record) em.assign(record, fields)
    else {
      // what is over is of no use to anybody; a new session is the time to sweep
      await em.nativeDelete(SessionRecord, { $or: [{ expiresAt: { $lt: now } }, { seenAt: { $lt: new Date(now.getTime() - idleMs) } }] })
      em.create(SessionRecord, { ...fields, idHash: hashOf(id), createdAt: now, expiresAt: new Date(now.getTime() + absoluteMs) })
    }
    await em.flush()
  }
}
