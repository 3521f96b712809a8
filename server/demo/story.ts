import type { EntityManager } from '@mikro-orm/core'
import type { CommentPlace } from '../../shared/contract/comments.ts'
import type { Edit } from '../../shared/parameters/edits.ts'
import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import { valueAt } from '../../shared/parameters/paths.ts'
import { editText, printSet } from '../../shared/parameters/set-text.ts'
import { DomainError } from '../http/errors.ts'
import type { Services } from '../http/services.ts'
import { describe, type Change } from '../modules/changes/change.entity.ts'
import { draftChange } from '../modules/changes/draft-change.ts'
import { again } from '../modules/changes/locate.ts'
import { setOf } from '../modules/changes/read-set.ts'
import { cancelChange, returnChange } from '../modules/changes/return-change.ts'
import { saveDraftText } from '../modules/changes/save-draft.ts'
import { prepareSubmission, submitChange } from '../modules/changes/submit-change.ts'
import { checkChange } from '../modules/checks/check-change.ts'
import { markAnswered } from '../modules/comments/mark-answered.ts'
import { placeWords } from '../modules/comments/place-words.ts'
import { writeComment } from '../modules/comments/write-comment.ts'
import { Machine } from '../modules/machines/machine.entity.ts'
import { heldRoles } from '../modules/people/held-roles.ts'
import { Person } from '../modules/people/person.entity.ts'
import { prepare, proposalFor, releaseChange } from '../modules/releases/release-change.ts'
import { Release } from '../modules/releases/release.entity.ts'
import { withdrawRelease } from '../modules/releases/withdraw-release.ts'
import { diffChange, rowsOf } from '../modules/reviews/diff-change.ts'
import { markRead } from '../modules/reviews/reading.ts'
import { recompute } from '../modules/reviews/recompute.ts'
import { mustBeAnother } from '../modules/reviews/may-sign.ts'
import { signPeerReview } from '../modules/reviews/sign-peer-review.ts'

/** A value altered by the story: where, and to what. */
export type Alteration = [pointer: string, to: unknown]

export interface Proposal {
  machine: string
  title: string
  reason: string
  author: string
  /** a whole set for the first change of a machine, else single values */
  content: MachineSet | Alteration[]
  /** for what the check finds outside policy: why, and for how many days; usual ones where it is left out */
  concession?: { reason: string; days: number }
}

/** Tells the demo's history with the program's own acts, each at its own time and by its own person. */
export class Story {
  private readonly services: Services
  private readonly start: Date
  /** hours since the story's start; every act moves on a little, so that no two share a moment */
  private hours = 0

  constructor(services: Services, start: Date) {
    this.services = services
    this.start = start
  }

  get now(): Date {
    return new Date(this.start.getTime() + this.hours * 3600_000)
  }

  /** Moves the clock on to a moment of the story, in days since its start. */
  day(days: number) {
    this.hours = Math.max(this.hours, days * 24)
  }

  /** One act in its own transaction. */
  async act<T>(work: (em: EntityManager, now: Date) => Promise<T>): Promise<T> {
    this.hours += 0.4
    return this.services.orm.em.fork().transactional((em) => work(em, this.now))
  }

  person = (em: EntityManager, name: string) => em.findOneOrFail(Person, { name })

  /** the services with the clock at the story's moment */
  private get then(): Services {
    const { now } = this
    return { ...this.services, now: () => now }
  }

  async draft({ machine, title, reason, author, content }: Proposal): Promise<Change> {
    const change = await this.act(async (em, now) => draftChange(em, { machine: await em.findOneOrFail(Machine, { key: machine }), title, reason, person: await this.person(em, author), now }))
    await this.write(change, author, content)
    return change
  }

  /** Saves in a draft: a whole set as text, or values one save at a time. */
  async write(change: Change, by: string, content: MachineSet | Alteration[]) {
    const saves = Array.isArray(content) ? content.map((a) => [a]) : [content]
    for (const save of saves)
      await this.act(async (em, now) => {
        const fresh = await again(em, change)
        const set = setOf(fresh.text)
        const text = Array.isArray(save) ? editText(fresh.text, save.map(([pointer, to]): Edit => ({ pointer, from: valueAt(set, pointer), to }))) : printSet(save)
        await saveDraftText(em, fresh, text, { person: await this.person(em, by), now })
      })
  }

  private async prepareSubmission(change: Change, by: string) {
    const em = this.services.orm.em.fork()
    return prepareSubmission(this.then, em, await again(em, change), { held: await heldRoles(em, await this.person(em, by)), now: this.now })
  }

  /** Requests a concession for everything that the check wants one for. */
  private async requestConcessions(change: Change, reason: string, days: number) {
    const em = this.services.orm.em.fork()
    const { result } = await checkChange(this.then, em, await again(em, change))
    const wanted = result.findings.filter((f) => f.level === 'concession needed')
    await this.act(async (tx, now) =>
      describe(await again(tx, change), { concessions: wanted.map((f) => ({ finding: f.key, characteristic: f.kind, limit: `${f.limit ?? ''} ${f.unit}`.trim() || f.kind, reason: reason || `${f.text} Agreed at the bench until the next release.`, until: new Date(now.getTime() + days * 86_400_000).toISOString().slice(0, 10), count: null })) }, now),
    )
  }

  /** Submits; what the check wants a concession for is requested with the reason given. */
  async submit(change: Change, by: string, { reason = '', days = 120 }: { reason?: string; days?: number } = {}) {
    const prepared = await this.prepareSubmission(change, by).catch(async (error: unknown) => {
      if (!(error instanceof DomainError) || !error.fields.some((f) => f.pointer === '/concessions')) throw error
      await this.requestConcessions(change, reason, days)
      return this.prepareSubmission(change, by)
    })
    await this.act(async (tx, now) => submitChange(tx, await again(tx, change), prepared, { person: await this.person(tx, by), now }))
  }

  /** Reads every row of what alters, as whoever signs has to. */
  private async read(change: Change, by: string) {
    await this.act(async (tx, now) => {
      const [fresh, person] = [await again(tx, change), await this.person(tx, by)]
      await markRead(tx, fresh, rowsOf(await diffChange(tx, fresh)), { person, held: await heldRoles(tx, person), now })
    })
  }

  /** Writes a comment; `under` the one of this number where it is given. */
  async comment(change: Change, by: string, text: string, { on = { kind: 'change' }, under }: { on?: CommentPlace; under?: number } = {}): Promise<number> {
    const em = this.services.orm.em.fork()
    const about = under === undefined ? await placeWords(this.then, em, await again(em, change), on, change.author.id) : ''
    return this.act(async (tx, now) => {
      const [fresh, person] = [await again(tx, change), await this.person(tx, by)]
      const comment = await writeComment(tx, fresh, { request: { text, on, ...(under === undefined ? {} : { under }) }, about, person, held: await heldRoles(tx, person), baseUrl: this.services.config.baseUrl, now })
      return comment.number
    })
  }

  async answered(change: Change, by: string, comment: number) {
    await this.act(async (tx, now) => {
      const person = await this.person(tx, by)
      await markAnswered(tx, await again(tx, change), comment, { person, held: await heldRoles(tx, person), now })
    })
  }

  async review(change: Change, by: string) {
    await this.read(change, by)
    const em = this.services.orm.em.fork()
    const read = await again(em, change)
    const { hash } = await recompute(this.then, em, read, read.contentHash!)
    await this.act(async (tx, now) => signPeerReview(tx, await again(tx, change), { contentHash: hash, person: await this.person(tx, by), now }))
  }

  async release(change: Change, by: string, version?: string, stepReason = '') {
    await this.read(change, by)
    const em = this.services.orm.em.fork()
    const read = await again(em, change)
    await mustBeAnother(em, read, await this.person(em, by))
    const content = await recompute(this.then, em, read, read.contentHash!)
    const chosen = version ?? (await proposalFor(em, read, content)).version
    this.hours += 0.4
    const request = { contentHash: content.hash, version: chosen, stepReason, person: await this.person(em, by), now: this.now }
    const prepared = await prepare(this.services, em, read, content, request)
    await this.services.orm.em.fork().transactional(async (tx) => releaseChange(tx, await again(tx, change), prepared, request))
  }

  /** From draft to release in the usual four steps. */
  async through(proposal: Proposal, reviewer: string, manager: string, version?: string) {
    const change = await this.draft(proposal)
    await this.submit(change, proposal.author, proposal.concession)
    await this.review(change, reviewer)
    await this.release(change, manager, version)
    return change
  }

  async giveBack(change: Change, by: string, reason: string) {
    await this.act(async (em, now) => returnChange(em, await again(em, change), { reason, person: await this.person(em, by), now }))
  }

  async cancel(change: Change, by: string, reason: string) {
    await this.act(async (em, now) => cancelChange(em, await again(em, change), { reason, person: await this.person(em, by), now }))
  }

  async withdraw(machine: string, version: string, by: string, reason: string) {
    await this.act(async (em, now) => withdrawRelease(em, await em.findOneOrFail(Release, { machine: { key: machine }, version }, { populate: ['machine'] }), { reason, person: await this.person(em, by), now }))
  }
}
