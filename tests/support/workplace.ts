import { randomBytes, randomUUID } from 'node:crypto'
import { rm } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { Express } from 'express'
import { pino } from 'pino'
import supertest from 'supertest'
import { afterAll } from 'vitest'
import { buildApp } from '../../server/app.ts'
import { readConfig } from '../../server/config.ts'
import { fileStore } from '../../server/db/file-store.ts'
import { openDatabase, type Orm } from '../../server/db/orm.ts'
import type { Services } from '../../server/http/services.ts'
import { inPlace } from '../../server/jobs/in-place.ts'
import { JobBoard } from '../../server/jobs/job-board.ts'
import { analysisStore } from '../../server/modules/checks/analysis-store.ts'
import { keepPublicKey, makeKey, openWorkplaceKeys } from '../../server/modules/keys/workplace-keys.ts'
import { Machine } from '../../server/modules/machines/machine.entity.ts'
import { hashPassword } from '../../server/modules/people/passwords.ts'
import { Person } from '../../server/modules/people/person.entity.ts'
import { RoleGrant } from '../../server/modules/people/role-grant.entity.ts'
import { sealsOf } from '../../server/modules/people/second-factor/seals.ts'
import type { Me, Role } from '../../shared/contract/people.ts'
import { keysInMemory } from './keys-in-memory.ts'

export const password = 'a long enough password'
let hash: Promise<string> | undefined

/** A signed-in person: supertest with the session's cookie and token. */
export interface SignedIn {
  get(path: string): supertest.Test
  post(path: string, body?: object): supertest.Test
  patch(path: string, body?: object): supertest.Test
  put(path: string, body?: object): supertest.Test
  delete(path: string): supertest.Test
  /** sends one file in a form */
  upload(path: string, field: string, bytes: Buffer, name: string, method?: 'put' | 'post'): supertest.Test
  me: Me
}

export interface Workplace {
  app: Express
  orm: Orm
  services: Services
  /** sets the clock; it stands still otherwise */
  at(time: Date | string): void
  person(name: string, roles: [Role, string | null][], options?: { confirmed?: boolean }): Promise<Person>
  signIn(person: Person): Promise<SignedIn>
  /** makes a person with these roles and signs in */
  as(roles: [Role, string | null][] | Role): Promise<SignedIn>
  close(): Promise<void>
}

/** A first key, without its entry in the ledger, so that a test's own acts begin the chain. */
async function firstKey(orm: Orm, from: Date) {
  const key = makeKey()
  const em = orm.em.fork()
  keepPublicKey(em, key, { from, person: null })
  await em.flush()
  return keysInMemory(key)
}

/** The whole server on an in-memory database, with a clock that stands still. */
export async function aWorkplace(env: NodeJS.ProcessEnv = {}): Promise<Workplace> {
  let time = new Date('2026-03-02T09:00:00Z')
  const orm = await openDatabase(':memory:')
  const folder = join(tmpdir(), `detent-test-${randomUUID()}`)
  const services: Services = {
    config: readConfig({ DETENT_MODE: 'workplace', DETENT_SECOND_FACTOR: 'optional', DETENT_COSTLY_PER_MINUTE: '1000000', ...env }),
    orm,
    now: () => time,
    checks: new JobBoard({ threads: inPlace(), store: analysisStore(orm, () => time) }),
    files: fileStore(folder),
    keys: await openWorkplaceKeys(orm.em.fork(), await firstKey(orm, time), time),
    seals: sealsOf(randomBytes(32)),
    mailQueued: () => {},
  }
  const app = buildApp({ services, log: pino({ level: 'silent' }), sessionSecret: 'a secret for tests alone' })
  let count = 0
  const workplace: Workplace = {
    app,
    orm,
    services,
    at: (t) => void (time = new Date(t)),
    async person(name, roles, { confirmed = true } = {}) {
      const em = orm.em.fork()
      const passwordHash = await (hash ??= hashPassword(password))
      const person = em.create(Person, { name, email: `${name.toLowerCase().replaceAll(/[^a-z]+/g, '.')}.${(count += 1)}@dunlin.example`, passwordHash, createdAt: time })
      for (const [role, key] of roles) {
        const machine = key === null ? null : await em.findOneOrFail(Machine, { key })
        em.create(RoleGrant, { person, role, machine, grantedAt: time, ...(confirmed ? { confirmedAt: time } : {}) })
      }
      await em.flush()
      return person
    },
    async signIn(person) {
      const agent = supertest.agent(app)
      await agent.post('/api/session').send({ email: person.email, password }).expect(200)
      const me = (await agent.get('/api/me').expect(200)).body as Me
      const withToken = (test: supertest.Test) => test.set('X-Detent-Token', me.token)
      return {
        get: (path) => agent.get(path),
        post: (path, body = {}) => withToken(agent.post(path)).send(body),
        patch: (path, body = {}) => withToken(agent.patch(path)).send(body),
        put: (path, body = {}) => withToken(agent.put(path)).send(body),
        delete: (path) => withToken(agent.delete(path)),
        upload: (path, field, bytes, name, method = 'put') => withToken(agent[method](path)).attach(field, bytes, name),
        me,
      }
    },
    async as(roles) {
      const list: [Role, string | null][] = typeof roles === 'string' ? [[roles, null]] : roles
      return workplace.signIn(await workplace.person(`Person ${count}`, list))
    },
    close: async () => {
      await services.checks.close()
      await orm.close(true)
      await rm(folder, { recursive: true, force: true })
    },
  }
  afterAll(() => workplace.close())
  return workplace
}
