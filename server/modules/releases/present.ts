import type { EntityManager } from '@mikro-orm/core'
import type { Allowed } from '../../../shared/contract/people.ts'
import type { ReleaseJointView, ReleaseSummary, ReleaseView, StandingConcession } from '../../../shared/contract/releases.ts'
import { Change } from '../changes/change.entity.ts'
import { presentSignature } from '../changes/present.ts'
import { versionsNamed } from '../firmware/firmware-authors.ts'
import { firmwareName } from '../firmware/firmware-version.entity.ts'
import type { HeldRole } from '../people/permissions.ts'
import { Signature } from '../reviews/signature.entity.ts'
import { mayDownload, mayWithdraw } from './permissions.ts'
import { ReleaseJoint } from './release-joint.entity.ts'
import { ReleaseKit } from './release-kit.entity.ts'
import { Release } from './release.entity.ts'
import { standingConcessions, whyNoMore } from './standing-concessions.ts'
import { unfitJoints } from './unfit-joints.ts'
import { Withdrawal } from './withdrawal.entity.ts'

/** Newest of its machine and not withdrawn: current; a withdrawal brings no older one back. */
export const stateOf = (release: Release, newestId: number, withdrawn: boolean): ReleaseSummary['state'] => (withdrawn ? 'withdrawn' : release.id === newestId ? 'current' : 'superseded')

export async function presentReleases(em: EntityManager, releases: readonly Release[]): Promise<ReleaseSummary[]> {
  const withdrawn = new Set((await em.find(Withdrawal, { release: { $in: releases.map((r) => r.id) } })).map((w) => w.release.id))
  const newest = new Map<number, number>()
  for (const r of await em.find(Release, { machine: { $in: [...new Set(releases.map((r) => r.machine.id))] } }, { fields: ['id', 'machine'], orderBy: { sequence: 'asc' } })) newest.set(r.machine.id, r.id)
  return releases.map((r) => ({
    machine: r.machine.key,
    machineName: r.machine.name,
    version: r.version,
    sequence: r.sequence,
    state: stateOf(r, newest.get(r.machine.id)!, withdrawn.has(r.id)),
    title: r.changeTitle,
    change: `${r.machine.key}-${r.changeNumber}`,
    releasedBy: r.releasedBy.name,
    releasedAt: r.releasedAt.toISOString(),
    joints: Object.keys(r.set.joints).length,
  }))
}

/** Whether somebody may download, all told: by role and state, and by what the release stands on. */
function mayTake(release: Release, held: readonly HeldRole[], state: ReleaseSummary['state'], concessions: readonly StandingConcession[]): Allowed {
  const role = mayDownload(release.machine.key, held, state)
  if (!role.allowed) return role
  const why = concessions.map(whyNoMore).find((w) => w !== null)
  return why ? { allowed: false, why: `${why}; it stops the downloads until it is renewed or a release does without it.` } : role
}

export async function presentRelease(em: EntityManager, release: Release, held: readonly HeldRole[], now: Date): Promise<ReleaseView> {
  const [summary] = await presentReleases(em, [release])
  const rows = await em.find(ReleaseJoint, { release }, { populate: ['joint', 'revision', 'image'] })
  const [before] = await em.find(Release, { machine: release.machine, sequence: { $lt: release.sequence } }, { orderBy: { sequence: 'desc' }, limit: 1, fields: ['id'] })
  const earlier = before ? new Set((await em.find(ReleaseJoint, { release: before.id })).map((r) => r.revision.id)) : new Set<number>()
  const change = await em.findOneOrFail(Change, { machine: release.machine, number: release.changeNumber })
  const signatures = await em.find(Signature, { change, round: change.round }, { orderBy: { id: 'asc' } })
  const withdrawal = await em.findOne(Withdrawal, { release }, { populate: ['person'] })
  const kit = await em.findOne(ReleaseKit, { release })
  const versions = await versionsNamed(em, [...new Set(Object.values(release.set.joints).map((j) => j.firmware))])
  const concessions = await standingConcessions(em, release, now)
  const items = rows.map((row): ReleaseJointView => {
    const j = release.set.joints[row.joint.key]
    return { joint: row.joint.key, name: j.name, family: release.set.families[j.family].name, bus: release.set.buses[j.bus].name, address: j.address, firmware: j.firmware, revision: row.revision.number, isNew: !earlier.has(row.revision.id), imageSha256: row.imageSha256, imageBytes: row.image.length }
  })
  return {
    ...summary,
    reason: release.reason,
    contentHash: release.contentHash,
    proposedStep: release.proposedStep,
    step: release.step,
    stepReason: release.stepReason,
    signatures: signatures.map((s) => presentSignature(s, change.round)),
    concessions,
    items,
    withdrawal: withdrawal ? { reason: withdrawal.reason, by: withdrawal.person.name, at: withdrawal.at.toISOString() } : null,
    kit: kit && { manifestSha256: kit.manifestSha256, keyId: kit.keyId, bytes: kit.zipBytes },
    firmwareImages: versions.filter((v) => v.imageSha256).map(firmwareName).sort(),
    needsReason: summary.state === 'superseded',
    unfit: summary.state === 'withdrawn' ? [] : await unfitJoints(em, release),
    may: { download: mayTake(release, held, summary.state, concessions), withdraw: mayWithdraw(release.machine.key, held, summary.state) },
  }
}
