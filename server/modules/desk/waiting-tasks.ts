import type { EntityManager } from '@mikro-orm/core'
import type { DeskTask } from '../../../shared/contract/desk.ts'
import { Evidence } from '../evidence/evidence.entity.ts'
import { firmwareName, FirmwareVersion } from '../firmware/firmware-version.entity.ts'
import { currentRelease } from '../machines/current-release.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Mail } from '../mail/mail.entity.ts'
import { may } from '../people/permissions.ts'
import { everybody, presentPeople, type Reader } from '../people/present.ts'
import { RoleGrant } from '../people/role-grant.entity.ts'
import { PolicyVersion } from '../policy/policy-version.entity.ts'
import { presentPolicy } from '../policy/present.ts'
import { standingConcessions } from '../releases/standing-concessions.ts'

export interface Asking extends Reader {
  now: Date
}

/** A concession is told of so many days before its last one. */
const noticeDays = 14

/** Proposed policies that this person may sign. */
export async function policiesToSign(em: EntityManager, asking: Asking): Promise<DeskTask[]> {
  const open = await em.find(PolicyVersion, { signedAt: null, declinedAt: null }, { populate: ['machine', 'author', 'signedBy'] })
  return open
    .filter((v) => presentPolicy(v as PolicyVersion, 0, asking).may.sign.allowed)
    .map((v) => ({ kind: 'policy', machine: v.machine.key, since: v.proposedAt.toISOString(), title: `Policy of ${v.machine.name}, version ${v.number}`, why: v.reason }))
}

/** Firmware versions drafted by others, for whoever publishes. */
export async function firmwareToPublish(em: EntityManager, { person, held }: Asking): Promise<DeskTask[]> {
  if (!may(held, 'publish firmware', null).allowed) return []
  const drafts = await em.find(FirmwareVersion, { state: 'draft' }, { populate: ['line', 'uploadedBy'] })
  return drafts
    .filter((v) => !v.writers.includes(person.id))
    .map((v) => ({ kind: 'firmware', line: v.line.key, version: v.version, since: v.createdAt.toISOString(), title: `Firmware ${firmwareName(v as FirmwareVersion)}`, why: `drafted by ${v.uploadedBy.name}; a release manager publishes it` }))
}

/** People whose signing right this person may confirm. */
export async function rightsToConfirm(em: EntityManager, asking: Asking): Promise<DeskTask[]> {
  const waiting = (await presentPeople(em, await everybody(em), asking)).filter((p) => p.may.confirmSigning.allowed)
  const grants = await em.find(RoleGrant, { person: { $in: waiting.map((p) => p.id) }, endedAt: null }, { orderBy: { grantedAt: 'asc' } })
  return waiting.map((p) => ({
    kind: 'signing right', person: p.id, title: `${p.name}’s signing right`, why: p.signingHold ?? 'newly granted; a second signer confirms it',
    since: (grants.find((g) => g.person.id === p.id && (!g.confirmedAt || p.signingHold !== null))?.grantedAt ?? asking.now).toISOString(),
  }))
}

/** Mail that could not be sent, for whoever keeps it. */
export async function failedMail(em: EntityManager, { held }: Asking): Promise<DeskTask[]> {
  if (!may(held, 'keep mail', null).allowed) return []
  const failed = await em.find(Mail, { state: 'failed' }, { orderBy: { id: 'asc' } })
  return failed.length === 0 ? [] : [{ kind: 'mail', since: failed[0].createdAt.toISOString(), title: failed.length === 1 ? 'One mail could not be sent' : `${failed.length} mails could not be sent`, why: failed[0].lastError ?? '' }]
}

/** One's own logs whose columns were never named. */
export async function logsToRead(em: EntityManager, { person }: Asking): Promise<DeskTask[]> {
  const logs = await em.find(Evidence, { uploadedBy: person, readAt: null, removedAt: null }, { populate: ['machine'] })
  return logs.map((e) => ({ kind: 'log', machine: e.machine.key, evidence: e.number, since: e.uploadedAt.toISOString(), title: e.name, why: 'its columns are not named yet: it is no evidence before' }))
}

/** Concessions of current releases that end soon, or have ended, for whoever can renew them. */
export async function concessionsToRenew(em: EntityManager, { held, now }: Asking): Promise<DeskTask[]> {
  const soon = new Date(now.getTime() + noticeDays * 86_400_000).toISOString().slice(0, 10)
  const tasks: DeskTask[] = []
  for (const machine of (await em.find(Machine, { retiredAt: null })).filter((m) => may(held, 'draft changes', m.key).allowed || may(held, 'sign release', m.key).allowed)) {
    const release = await currentRelease(em, machine)
    if (!release) continue
    for (const c of await standingConcessions(em, release, now)) {
      if (c.state === 'holds' && !(c.until !== null && c.until <= soon)) continue
      const ended = c.state === 'expired' ? `ended on ${c.until}` : c.state === 'used up' ? `used up: ${c.used} of ${c.count} boards` : `ends on ${c.until}`
      tasks.push({ kind: 'concession', machine: machine.key, release: release.version, since: release.releasedAt.toISOString(), title: `Concession for ${c.characteristic} of ${machine.name} ${release.version}`, why: `${ended}; it is renewed in a change that two people sign` })
    }
  }
  return tasks
}
