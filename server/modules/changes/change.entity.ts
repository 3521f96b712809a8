import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { ChangeState, ConcessionRequest } from '../../../shared/contract/changes.ts'
import { DomainError } from '../../http/errors.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Person } from '../people/person.entity.ts'
import { Release } from '../releases/release.entity.ts'

/** A proposal over one machine, from a base release. Its content is the text of a whole machine set. */
export const Change = defineEntity({
  name: 'Change',
  uniques: [{ properties: ['machine', 'number'] }],
  properties: {
    id: p.integer().primary(),
    machine: () => p.manyToOne(Machine),
    number: p.integer(),
    title: p.string().length(120),
    reason: p.text(),
    state: p.string().$type<ChangeState>(),
    author: () => p.manyToOne(Person),
    /** everybody who wrote in it, the author first: none of them signs it */
    writers: p.json<number[]>(),
    baseRelease: () => p.manyToOne(Release).nullable(),
    /** JSON with comments; what the text view shows */
    text: p.text(),
    concessions: p.json<ConcessionRequest[]>(),
    /** counts every alteration: the ETag */
    revision: p.integer().default(1),
    /** counts the rounds of signing; a signature of an earlier round is void */
    round: p.integer().default(0),
    /** the hash that this round's signatures bind to, while submitted or approved */
    contentHash: p.string().length(64).nullable().index(),
    createdAt: p.datetime(),
    alteredAt: p.datetime(),
  },
})
export type Change = InferEntity<typeof Change>

const at = (change: Change) => `${change.machine.name} ${change.number}`

function mustBe(change: Change, states: ChangeState[], act: string) {
  if (states.includes(change.state)) return
  throw new DomainError('wrong-state', `Change ${at(change)} is ${change.state}; it can't be ${act}. Nothing was altered; reload to see how it stands.`)
}

const touch = (change: Change, now: Date) => {
  change.revision += 1
  change.alteredAt = now
}

/** New text of the draft by one of its writers. */
export function saveText(change: Change, text: string, now: Date) {
  mustBe(change, ['draft'], 'edited; return it to draft first')
  change.text = text
  touch(change, now)
}

export function describe(change: Change, edit: { title?: string; reason?: string; concessions?: ConcessionRequest[] }, now: Date) {
  mustBe(change, ['draft'], 'edited; return it to draft first')
  Object.assign(change, edit)
  touch(change, now)
}

/** Somebody who may write from now on, and so counts as a co-author. */
export function admitWriter(change: Change, person: Person, now: Date) {
  mustBe(change, ['draft'], 'opened to another writer')
  if (!change.writers.includes(person.id)) change.writers = [...change.writers, person.id]
  touch(change, now)
}

/** Freezes the content: from here on the signatures bind to its hash. */
export function submit(change: Change, contentHash: string, now: Date) {
  mustBe(change, ['draft'], 'submitted')
  Object.assign(change, { state: 'submitted', contentHash, round: change.round + 1 })
  touch(change, now)
}

export function approve(change: Change, now: Date) {
  mustBe(change, ['submitted'], 'approved')
  change.state = 'approved'
  touch(change, now)
}

/** Back to draft; whatever was signed is void. */
export function returnToDraft(change: Change, now: Date) {
  mustBe(change, ['submitted', 'approved'], 'returned')
  Object.assign(change, { state: 'draft', contentHash: null, round: change.round + 1 })
  touch(change, now)
}

/** The check no longer says what was signed: a new round on a new hash, signatures void. */
export function renewHash(change: Change, contentHash: string, now: Date) {
  mustBe(change, ['submitted', 'approved'], 'checked again')
  Object.assign(change, { state: 'submitted', contentHash, round: change.round + 1 })
  touch(change, now)
}

/** Evidence came or went before the first signature: the round goes on, on another hash. */
export function takeEvidence(change: Change, contentHash: string, now: Date) {
  mustBe(change, ['submitted'], 'given evidence')
  change.contentHash = contentHash
  touch(change, now)
}

/** The draft stands on another release from now on. */
export function rebase(change: Change, release: Release, now: Date) {
  mustBe(change, ['draft'], 'brought up to date')
  change.baseRelease = release
  touch(change, now)
}

export function markReleased(change: Change, now: Date) {
  mustBe(change, ['approved'], 'released')
  change.state = 'released'
  touch(change, now)
}

export function cancel(change: Change, now: Date) {
  mustBe(change, ['draft', 'submitted', 'approved'], 'cancelled')
  Object.assign(change, { state: 'cancelled', contentHash: null, round: change.round + 1 })
  touch(change, now)
}
