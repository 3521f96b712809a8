import type { EntityManager } from '@mikro-orm/core'
import type { ChangeEventKind, ChangeEventView, ChangeSummary, ChangeView, SignatureView } from '../../../shared/contract/changes.ts'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { newestRelease } from '../machines/current-release.ts'
import { Person } from '../people/person.entity.ts'
import type { HeldRole } from '../people/permissions.ts'
import { lastDayOf } from '../policy/concession-rules.ts'
import { policyInForce } from '../policy/policy-in-force.ts'
import { Signature } from '../reviews/signature.entity.ts'
import { ChangeEvent } from './change-event.entity.ts'
import type { Change } from './change.entity.ts'
import { changeKey } from './locate.ts'
import { abilitiesOn } from './permissions.ts'
import { setOf } from './read-set.ts'

/** How the rail is drawn: the state, or the last thing that knocked the ball back. */
export function lifeOf(change: Change, lastEvent: ChangeEventKind | undefined): ChangeSummary['life'] {
  if (change.state === 'draft' && lastEvent === 'returned') return 'returned'
  if ((change.state === 'draft' || change.state === 'submitted') && (lastEvent === 'signature void' || lastEvent === 'brought up to date')) return 'signature void'
  return change.state
}

/** Events that move the ball; the others leave the life as it was. */
const moving: ChangeEventKind[] = ['drafted', 'submitted', 'approved', 'returned', 'signature void', 'brought up to date', 'released', 'cancelled']

export const summaryOf = (change: Change, names: ReadonlyMap<number, string>, lastMove: ChangeEventKind | undefined): ChangeSummary => ({
  key: changeKey(change),
  machine: change.machine.key,
  machineName: change.machine.name,
  number: change.number,
  title: change.title,
  state: change.state,
  life: lifeOf(change, lastMove),
  author: names.get(change.author.id) ?? '',
  writers: change.writers.map((id) => names.get(id) ?? ''),
  baseVersion: change.baseRelease?.version ?? null,
  alteredAt: change.alteredAt.toISOString(),
})

/** Summaries of many changes with as many queries as of one. */
export async function presentSummaries(em: EntityManager, changes: readonly Change[]): Promise<ChangeSummary[]> {
  const ids = [...new Set(changes.flatMap((c) => [c.author.id, ...c.writers]))]
  const names = new Map((await em.find(Person, { id: { $in: ids } })).map((p) => [p.id, p.name]))
  const events = await em.find(ChangeEvent, { change: { $in: changes.map((c) => c.id) }, kind: { $in: moving } }, { orderBy: { id: 'asc' } })
  const last = new Map(events.map((e) => [e.change.id, e.kind]))
  return changes.map((c) => summaryOf(c, names, last.get(c.id)))
}

export const presentSignature = (s: Signature, round: number): SignatureView => ({
  meaning: s.meaning,
  statement: s.statement,
  person: s.personName,
  at: s.at.toISOString(),
  contentHash: s.contentHash,
  void: s.round !== round,
})

export async function presentChange(em: EntityManager, change: Change, { person, held, now }: { person: Person; held: readonly HeldRole[]; now: Date }): Promise<ChangeView> {
  const [summary] = await presentSummaries(em, [change])
  const events = await em.find(ChangeEvent, { change }, { orderBy: { id: 'asc' }, populate: ['person'] })
  const signatures = await em.find(Signature, { change }, { orderBy: { id: 'asc' } })
  const policy = await policyInForce(em, change.machine)
  const newest = await newestRelease(em, change.machine)
  return {
    ...summary,
    reason: change.reason,
    revision: change.revision,
    concessions: change.concessions,
    contentHash: change.contentHash ?? null,
    text: change.text,
    set: setOf(change.text),
    base: change.baseRelease?.set ?? emptySet(),
    events: events.map((e): ChangeEventView => ({ kind: e.kind, person: e.person?.name ?? null, at: e.at.toISOString(), note: e.note })),
    signatures: signatures.map((s) => presentSignature(s, change.round)),
    peerReviewsNeeded: policy.content.peerReviews,
    concessionRules: policy.content.concession ? { lastDay: lastDayOf(policy.content.concession.longestDays, now), mostBoards: policy.content.concession.mostBoards } : null,
    may: abilitiesOn(change, person, held, { signatures: signatures.filter((s) => s.round === change.round), onNewest: newest === null || newest.id === change.baseRelease?.id }),
  }
}
