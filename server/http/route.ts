import { createHash } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import type { Static, TSchema } from '@sinclair/typebox'
import canonicalize from 'canonicalize'
import type { Request, Response, Router } from 'express'
import { appendEntry } from '../modules/ledger/append-entry.ts'
import type { LedgerSubject } from '../modules/ledger/ledger-entry.entity.ts'
import { heldRoles } from '../modules/people/held-roles.ts'
import { codeMinutes, type SecondFactorRule } from '../../shared/contract/second-factor.ts'
import { may, signingActs, underRule, type Act, type HeldRole } from '../modules/people/permissions.ts'
import { Person } from '../modules/people/person.entity.ts'
import { benchKeyOf, rightsOf } from './bench-key.ts'
import { budgetsOf, type Budgets } from './budget.ts'
import { DomainError } from './errors.ts'
import { Receipt } from './receipt.entity.ts'
import { receiveUpload, type Upload, type UploadSpec } from './receive-upload.ts'
import type { Services } from './services.ts'
import { keepable, validBody } from './validate.ts'

/** Where a request points: the machine it belongs to (null: none), and what was found on the way. */
export interface Place {
  machine: string | null
  subject: LedgerSubject
}

/** Where a stream of events goes: each one is sent as JSON; `end` closes it. */
export interface EventSink {
  send(event: unknown): void
  end(): void
}

/** The answer of a route: JSON, bytes with a name, or events for as long as somebody listens (`stream` begins, and answers how to leave off). */
export type Answer =
  | { status?: number; body: unknown; etag?: number; headers?: Record<string, string> }
  | { status?: number; bytes: Uint8Array; type: string; fileName: string; headers?: Record<string, string> }
  | { status?: number; stream: (sink: EventSink) => () => void }

export interface Call<B, P extends Place> {
  services: Services
  em: EntityManager
  person: Person
  held: HeldRole[]
  /** name of the bench key that speaks for the person; null for the person in a session */
  benchKey: string | null
  place: P
  params: Record<string, string>
  query: Record<string, string>
  body: B
  /** revision that the writer saw, from If-Match; only on routes that ask for it */
  ifMatch: number
  /** the file received; only on routes that take one */
  upload: Upload | null
  now: Date
  session: Request['session']
  /** Runs an act in one transaction and keeps its answer for a repeat of the same request. */
  act(work: (em: EntityManager) => Promise<Answer>): Promise<Answer>
}

export interface RouteSpec<B extends TSchema = TSchema, P extends Place = Place> {
  method: 'get' | 'post' | 'patch' | 'put' | 'delete'
  path: string
  /** what it does, in words */
  summary: string
  /** the act of the matrix it takes; `signed-in` for what everybody may do on their own behalf */
  access: Act | 'signed-in'
  /** finds what the path names; a place that the person may not read is not found */
  place?: (em: EntityManager, params: Record<string, string>) => Promise<P>
  body?: B
  /** what it reads of the query: told in the API's document */
  query?: Record<string, { description: string; example?: string; required?: true }>
  /** media type of its answer, where that is not JSON */
  gives?: string
  ifMatch?: boolean
  /** a bench key may take it too; every other route refuses one */
  benchKey?: true
  /** takes much time, memory or disk: counted against the person's budget of a minute */
  costly?: true
  /** the one file it takes, in a form; received when the person may, and thrown away again unless the handler keeps it */
  upload?: UploadSpec
  handle: (call: Call<Static<B>, P>) => Promise<Answer>
}

/** A route with its types checked, ready for the table. */
export const route = <B extends TSchema, P extends Place = Place>(spec: RouteSpec<B, P>): RouteSpec => spec as unknown as RouteSpec

const nowhere = async (): Promise<Place> => ({ machine: null, subject: {} })

/** Puts one Detent person in the request; done by http/session.ts. */
export const personOf = (req: Request): Person => {
  const person = (req as Request & { user?: Person }).user
  if (!person) throw new DomainError('not-signed-in', 'Sign in first; nothing was done.')
  return person
}

function readIfMatch(req: Request): number {
  const header = req.headers['if-match']
  if (!header) throw new DomainError('precondition-required', 'This act must say which state it was decided on: send the ETag you read as If-Match. Nothing was done.')
  const match = /^"(\d+)"$/.exec(header)
  if (!match) throw new DomainError('precondition-failed', 'If-Match does not hold an ETag of Detent. Nothing was done; read it again and use the ETag given there.')
  return Number(match[1])
}

/** @throws DomainError precondition-failed when the thing was altered since its reader saw it */
export function mustMatch(call: { ifMatch: number }, revision: number) {
  if (call.ifMatch !== revision)
    throw new DomainError('precondition-failed', 'It was altered since you read it. Nothing was done; what you typed is still with you. Reload, look at what is new, then do it again.', { extra: { revision } })
}

/** Members of bodies that are secret: no fast hash of them is kept. */
const secrets = new Set(['password', 'current', 'next', 'secret', 'code'])

/** Names a request, so that a repeat under the same key is told from another one. */
function requestHash(req: Request, body: unknown): string {
  const open = typeof body === 'object' && body !== null ? Object.fromEntries(Object.entries(body).filter(([name]) => !secrets.has(name))) : null
  return createHash('sha256').update(canonicalize({ method: req.method, path: req.originalUrl, body: open })!).digest('hex')
}

/** The same role asked again inside the transaction: what was ended or held meanwhile stops the act. */
async function mustStillBeAllowed(em: EntityManager, { spec, req, person, place, rule, now }: Acting) {
  const fresh = await em.findOneOrFail(Person, { id: person.id }, { refresh: true })
  if (fresh.disabledAt) throw new DomainError('not-signed-in', 'This person was disabled meanwhile. Nothing was done.')
  const held = underRule(rule, fresh, await rightsOf(em, benchKeyOf(req), await heldRoles(em, fresh), now))
  if (spec.access !== 'signed-in') mustBeAllowed(held, spec, place)
}

function mustBeAllowed(held: readonly HeldRole[], spec: RouteSpec, place: Place) {
  if (spec.access === 'signed-in') return
  const answer = may(held, spec.access, place.machine)
  if (answer.allowed) return
  const waits = held.some((h) => !h.confirmed) && answer.why.startsWith('Your signing role')
  const code = !waits ? 'not-permitted' : answer.why.includes('second factor') ? 'second-factor-missing' : 'signing-right-unconfirmed'
  throw new DomainError(code, `${answer.why} Nothing was done.`, { recorded: spec.method !== 'get' })
}

/**
 * Where the workplace asks for a code at each signature, one must have been entered in this session lately.
 *
 * @throws DomainError code-asked
 */
function mustHaveEnteredCode(rule: SecondFactorRule, spec: RouteSpec, req: Request, now: Date) {
  if (rule !== 'signatures' || spec.access === 'signed-in' || spec.method === 'get' || !signingActs.includes(spec.access)) return
  const since = now.getTime() - (req.session.codeAt ?? Number.NEGATIVE_INFINITY)
  if (since < 0 || since > codeMinutes * 60_000) throw new DomainError('code-asked', `This workplace asks for a code of your second factor before each signature. Nothing was done; enter one, then sign within ${codeMinutes} minutes.`)
}

interface Acting {
  spec: RouteSpec
  req: Request
  person: Person
  place: Place
  body: unknown
  rule: SecondFactorRule
  now: Date
}

/** @throws DomainError invalid-request for a key of another form */
function keyOf(req: Request): string | null {
  const key = req.headers['idempotency-key']
  if (key !== undefined && (typeof key !== 'string' || !/^[\w-]{8,80}$/.test(key))) throw new DomainError('invalid-request', 'Idempotency-Key takes 8 to 80 letters, digits, hyphens and underscores. Nothing was done.')
  return key ?? null
}

/**
 * The kept answer of the same request under the same key; null when there is none.
 *
 * @throws DomainError key-reused when the key belongs to another request
 */
async function keptAnswer(em: EntityManager, { req, person, body }: Acting): Promise<Answer | null> {
  const key = keyOf(req)
  const earlier = key === null ? null : await em.findOne(Receipt, { personId: person.id, key })
  if (!earlier) return null
  if (earlier.requestHash !== requestHash(req, body)) throw new DomainError('key-reused', 'This Idempotency-Key belongs to another request. Nothing was done; use a new key.')
  return JSON.parse(earlier.body) as Answer
}

/** Runs an act in one transaction; under an Idempotency-Key its answer is kept there for a repeat of the same request. */
async function transact(em: EntityManager, acting: Acting, work: (em: EntityManager) => Promise<Answer>): Promise<Answer> {
  const { req, person, body, now } = acting
  const key = keyOf(req)
  return em.transactional(async (tx) => {
    const kept = await keptAnswer(tx, acting)
    if (kept) return kept
    await mustStillBeAllowed(tx, acting)
    const answer = await work(tx)
    if (key !== null) tx.create(Receipt, { personId: person.id, key, requestHash: requestHash(req, body), status: answer.status ?? 200, body: JSON.stringify(answer), createdAt: now })
    return answer
  })
}

/** Longest that one stream is kept: the browser opens it anew then, and session and rights are asked again. */
const streamMs = 10 * 60_000
/** A line now and then keeps proxies from closing a silent stream. */
const breathMs = 20_000

/** Server-sent events as the HTML standard frames them. */
function sendEvents(res: Response, begin: (sink: EventSink) => () => void) {
  res.status(200).set({ 'Content-Type': 'text/event-stream', 'Cache-Control': 'no-store', 'X-Accel-Buffering': 'no' })
  res.flushHeaders()
  const leave = begin({ send: (event) => res.write(`data: ${JSON.stringify(event)}\n\n`), end: () => res.end() })
  const breath = setInterval(() => res.write(':\n\n'), breathMs)
  const last = setTimeout(() => res.end(), streamMs)
  res.on('close', () => {
    clearInterval(breath)
    clearTimeout(last)
    leave()
  })
}

/** Sends an answer; downloads carry their name by RFC 6266. */
function send(res: Response, answer: Answer) {
  if ('stream' in answer) {
    sendEvents(res, answer.stream)
    return
  }
  res.status(answer.status ?? 200).set({ 'Cache-Control': 'no-store', ...answer.headers })
  if ('bytes' in answer) {
    const ascii = answer.fileName.replace(/[^\x20-\x7e]|["\\]/g, '_')
    res.set({ 'Content-Type': answer.type, 'Content-Disposition': `attachment; filename="${ascii}"; filename*=UTF-8''${encodeURIComponent(answer.fileName).replace(/['()*]/g, (c) => `%${c.charCodeAt(0).toString(16).toUpperCase()}`)}` })
    res.end(Buffer.from(answer.bytes))
    return
  }
  if (answer.etag !== undefined) res.set('ETag', `"${answer.etag}"`)
  if (answer.body === undefined) res.end()
  else res.json(answer.body)
}

/** A refusal that tells of misuse goes into the ledger, in a transaction of its own. */
async function record(services: Services, spec: RouteSpec, error: DomainError, person: Person, place: Place, now: Date) {
  await services.orm.em.fork().transactional((em) => appendEntry(em, { at: now, person, act: 'refused', subject: place.subject, details: { asked: spec.summary, refusal: error.code, why: error.message } }))
}

const nothingToRead = () => new DomainError('not-found', 'There is nothing at this address that you may read. Check the address, or ask an administrator for a role on the machine.')

/**
 * Where a request leads. Of a machine that the person may not read, the answer is the same whether it exists or not, and whatever it has.
 *
 * @throws DomainError not-found
 */
async function placeOf(em: EntityManager, spec: RouteSpec, params: Record<string, string>, held: readonly HeldRole[]): Promise<Place> {
  if (params.machine !== undefined && !may(held, 'read', params.machine).allowed) throw nothingToRead()
  const place = await (spec.place ?? nowhere)(em, params)
  if (place.machine !== null && !may(held, 'read', place.machine).allowed) throw nothingToRead()
  return place
}

const asksSecret = (spec: RouteSpec) => Object.keys((spec.body?.properties as object | undefined) ?? {}).some((name) => secrets.has(name))

/** @throws DomainError too-many-requests */
function mustHaveBudget(budgets: Budgets, spec: RouteSpec, person: Person, now: Date) {
  if (asksSecret(spec)) budgets.guesses.mustHaveLeft(person.id, now, 'There were too many wrong passwords or codes.')
  if (!spec.costly) return
  budgets.costly.mustHaveLeft(person.id, now, 'You asked for more costly things than the server does for one person in a minute.')
  budgets.costly.spend(person.id, now)
}

async function answerTo(services: Services, budgets: Budgets, spec: RouteSpec, req: Request, res: Response): Promise<Answer> {
  const em = services.orm.em.fork()
  const now = services.now()
  const person = await em.findOneOrFail(Person, { id: personOf(req).id })
  const key = benchKeyOf(req)
  if (key && !spec.benchKey) {
    const refusal = new DomainError('not-permitted', 'A bench key reads machines, releases, boards and firmware, and records flashes; nothing else. Nothing was done; sign in for this.')
    if (spec.method !== 'get') await record(services, spec, refusal, person, await nowhere(), now)
    throw refusal
  }
  const rule = services.config.secondFactor
  const held = underRule(rule, person, await rightsOf(em, key, await heldRoles(em, person), now))
  const params = req.params as Record<string, string>
  const query = req.query as Record<string, string>
  if (![...Object.values(params), ...Object.values(query)].every((v) => typeof v === 'string' && keepable(v))) throw new DomainError('invalid-request', "The address holds a character that can't stand in it, or names something twice. Nothing was done.")
  const place = await placeOf(em, spec, params, held)
  let upload: Upload | null = null
  try {
    mustBeAllowed(held, spec, place)
    mustHaveBudget(budgets, spec, person, now)
    const ifMatch = spec.ifMatch ? readIfMatch(req) : 0
    if (spec.upload) upload = await receiveUpload(req, res, services.files, spec.upload)
    const body: unknown = spec.body ? validBody(spec.body, (req.body as unknown) ?? {}) : undefined
    const acting: Acting = { spec, req, person, place, body: upload ? { file: upload.file.sha256, name: upload.name } : body, rule, now }
    // asked before the handler too: its guards see the state after the first request, and would refuse the repeat whose answer was lost
    const kept = spec.method === 'get' ? null : await keptAnswer(em, acting)
    if (kept) return kept
    mustHaveEnteredCode(rule, spec, req, now)
    return await spec.handle({
      services,
      em,
      person,
      held,
      benchKey: key?.name ?? null,
      place,
      params,
      query,
      body,
      ifMatch,
      upload,
      now,
      session: req.session,
      act: (work) => transact(em, acting, work),
    })
  } catch (error) {
    if (error instanceof DomainError && (error.code === 'wrong-password' || error.code === 'wrong-code')) budgets.guesses.spend(person.id, now)
    if (error instanceof DomainError && error.recorded) await record(services, spec, error, person, place, now)
    throw error
  } finally {
    await upload?.file.discard()
  }
}

/** Puts the routes of the table on an Express router. */
export function mount(router: Router, services: Services, specs: readonly RouteSpec[]) {
  const budgets = budgetsOf(services.config)
  for (const spec of specs)
    router[spec.method](spec.path, (req, res, next) => {
      answerTo(services, budgets, spec, req, res).then(
        (answer) => {
          if (spec.method !== 'get') services.mailQueued()
          send(res, answer)
        },
        next,
      )
    })
}
