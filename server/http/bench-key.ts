import type { EntityManager } from '@mikro-orm/core'
import type { Request, RequestHandler } from 'express'
import { BenchKey, holds } from '../modules/bench-keys/bench-key.entity.ts'
import { may, type HeldRole } from '../modules/people/permissions.ts'
import { DomainError } from './errors.ts'
import type { Services } from './services.ts'
import { hashOf } from './session-store.ts'

type WithKey = Request & { user?: unknown; benchKey?: BenchKey }

/** The bench key that a request carries, if it does. */
export const benchKeyOf = (req: Request): BenchKey | null => (req as WithKey).benchKey ?? null

/** `lastUsedAt` is written at most this often, so that reading does not write. */
const usedEveryMs = 60_000

const refused = () => new DomainError('not-signed-in', 'This bench key is not known, or it has expired or was revoked. Nothing was done; make another one on your account page.')

async function keyNamed(services: Services, header: string): Promise<BenchKey> {
  const secret = /^Bearer ([\w-]{20,200})$/.exec(header)?.[1]
  if (!secret) throw new DomainError('not-signed-in', 'The Authorization header takes a bench key: "Bearer" and the key. Nothing was done.')
  const em = services.orm.em.fork()
  const now = services.now()
  const key = await em.findOne(BenchKey, { secretHash: hashOf(secret) }, { populate: ['person'] })
  if (!key || !holds(key, now) || key.person.disabledAt) throw refused()
  if (!key.lastUsedAt || now.getTime() - key.lastUsedAt.getTime() > usedEveryMs) await em.nativeUpdate(BenchKey, { id: key.id }, { lastUsedAt: now })
  return key as BenchKey
}

/**
 * Takes `Authorization: Bearer …` as a bench key: the request then speaks for the key's person, with the key's rights alone, whatever
 * session came with it. A key that does not hold is refused on every route.
 */
export const acceptBenchKeys = (services: Services): RequestHandler => (req, _res, next) => {
  const header = req.headers.authorization
  if (header === undefined) return next()
  keyNamed(services, header).then((key) => {
    Object.assign(req, { benchKey: key, user: key.person })
    next()
  }, next)
}

/**
 * What is held by a request: everything that the person holds, or through a bench key a builder's part on the key's machines, as far
 * as the person may still record flashes there.
 *
 * @throws DomainError not-signed-in when the key was revoked meanwhile
 */
export async function rightsOf(em: EntityManager, key: BenchKey | null, held: HeldRole[], now: Date): Promise<HeldRole[]> {
  if (!key) return held
  const fresh = await em.findOne(BenchKey, { id: key.id }, { refresh: true })
  if (!fresh || !holds(fresh, now)) throw refused()
  return fresh.machines.filter((machine) => may(held, 'record flashes', machine).allowed).map((machine) => ({ role: 'builder', machine, confirmed: false }))
}
