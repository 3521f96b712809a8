import type { EntityManager } from '@mikro-orm/core'
import canonicalize from 'canonicalize'
import semver from 'semver'
import { statements } from '../../../shared/contract/reviews.ts'
import { versionSteps, type RevisionContent } from '../../../shared/contract/releases.ts'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { DomainError } from '../../http/errors.ts'
import { addEvent } from '../changes/add-event.ts'
import { markReleased, type Change } from '../changes/change.entity.ts'
import { inState } from '../changes/permissions.ts'
import { resolveJoint, sha256, type ResolvedJoint } from '../checks/resolve-joint.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { newestRelease } from '../machines/current-release.ts'
import type { Joint } from '../machines/joint.entity.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { Person } from '../people/person.entity.ts'
import { mustBeAnother } from '../reviews/may-sign.ts'
import { Signature } from '../reviews/signature.entity.ts'
import type { Content } from '../reviews/content-of.ts'
import { keepIdentities } from './keep-identities.ts'
import { prepareRelease, type PreparedJoint } from './prepare-release.ts'
import { proposeVersion, stepBetween, stepOf, type Resolved } from './propose-version.ts'
import { ReleaseJoint } from './release-joint.entity.ts'
import { Release } from './release.entity.ts'
import { Revision } from './revision.entity.ts'

export interface ReleaseRequest {
  contentHash: string
  version: string
  stepReason: string
  person: Person
  now: Date
}

/** The version and step Detent proposes for a change as it stands. */
export async function proposalFor(em: EntityManager, change: Change, content: Pick<Content, 'set' | 'joints'>) {
  const base = change.baseRelease?.set ?? emptySet()
  const { schemas } = await schemasFor(em, base)
  const map = new Map(Object.entries(schemas))
  const resolved: Resolved = new Map(Object.keys(base.joints).map((j) => [j, resolveJoint(base, j, map, 0)] as const).filter((e): e is [string, ResolvedJoint & { kind: 'resolved' }] => e[1].kind === 'resolved'))
  const { step, because } = stepOf(base, content.set, resolved, content.joints)
  return proposeVersion(change.baseRelease?.version ?? null, step, because)
}

/** The slow half of a release, before any transaction: encode everything for the next sequence number and prove it. */
export async function prepare(em: EntityManager, change: Change, content: Content) {
  const sequence = change.machine.lastSequence + 1
  return { content, sequence, joints: prepareRelease(content, sequence), proposal: await proposalFor(em, change, content) }
}

type Prepared = Awaited<ReturnType<typeof prepare>>

function mustBeNextVersion(request: ReleaseRequest, newest: Release | null, proposal: Prepared['proposal']) {
  const refuse = (detail: string): never => {
    throw new DomainError('version-refused', `Version ${request.version} can't be given: ${detail}. Nothing was released.`, { fields: [{ pointer: '/version', detail }] })
  }
  if (semver.valid(request.version) !== request.version) refuse('a version has the form 1.2.3 (SemVer 2.0.0)')
  if (semver.prerelease(request.version)) refuse('a release is no pre-release')
  if (!newest) return proposal.step
  if (!semver.gt(request.version, newest.version)) refuse(`it does not come after ${newest.version}`)
  const step = stepBetween(newest.version, request.version)
  if (versionSteps.indexOf(step) < versionSteps.indexOf(proposal.step) && request.stepReason.trim() === '')
    throw new DomainError('version-refused', `${request.version} is a lower step than ${proposal.step}, which Detent proposes (${proposal.because[0]}). Say why, or take ${proposal.version}. Nothing was released.`, { fields: [{ pointer: '/stepReason', detail: 'a lower step than proposed needs a reason' }] })
  return step
}

/** What the release signature binds to: the content, and what the release adds to it. */
const releaseHash = (request: ReleaseRequest, sequence: number, peers: readonly Signature[]) =>
  sha256(canonicalize({ contentHash: request.contentHash, version: request.version, sequence, stepReason: request.stepReason, peerSignatures: peers.map((s) => ({ person: s.personName, at: s.at.toISOString(), contentHash: s.contentHash })) })!)

const revisionContent = (content: Content, joint: string): RevisionContent => {
  const j = content.set.joints[joint]
  const r = content.joints.get(joint)!
  return { family: j.family, bus: j.bus, address: j.address, firmware: j.firmware, schemaHash: content.schemaHashes[j.firmware], values: r.values, driveTrain: content.set.families[j.family].driveTrain, board: j.board ?? null, imageSha256: r.imageSha256 }
}

/** A joint's revision: the last one when nothing of it differs, else a new one. */
async function revisionFor(em: EntityManager, joint: Joint, content: RevisionContent, now: Date): Promise<Revision> {
  const contentHash = sha256(canonicalize(content)!)
  const [last] = await em.find(Revision, { joint }, { orderBy: { number: 'desc' }, limit: 1 })
  if (last?.contentHash === contentHash) return last
  return em.create(Revision, { joint, number: (last?.number ?? 0) + 1, content, contentHash, createdAt: now })
}

async function writeJoints(em: EntityManager, release: Release, content: Content, prepared: readonly PreparedJoint[], joints: ReadonlyMap<string, Joint>, now: Date) {
  for (const p of prepared) {
    const joint = joints.get(p.joint)!
    em.create(ReleaseJoint, { release, joint, revision: await revisionFor(em, joint, revisionContent(content, p.joint), now), image: p.image, imageSha256: p.sha256 })
  }
}

/**
 * Signs second, and releases: revisions, release, ledger entries and mails in one transaction, or nothing.
 *
 * The signer's password was re-entered before.
 *
 * @throws DomainError wrong-state, own-work, base-outdated, content-differs, version-refused
 */
export async function releaseChange(em: EntityManager, change: Change, prepared: Prepared, request: ReleaseRequest): Promise<Release> {
  const { person, now } = request
  const open = inState(change, 'approved')
  if (!open.allowed) throw new DomainError('wrong-state', `${open.why} Only an approved change is released. Nothing was released.`)
  await mustBeAnother(em, change, person)
  const newest = await newestRelease(em, change.machine)
  if ((newest?.id ?? null) !== (change.baseRelease?.id ?? null)) throw new DomainError('base-outdated', `Release ${newest?.version} came meanwhile. Nothing was released; the change has to be brought up to date and signed again.`)
  if (change.contentHash !== prepared.content.hash || request.contentHash !== prepared.content.hash || change.machine.lastSequence + 1 !== prepared.sequence)
    throw new DomainError('content-differs', 'The change moved while you signed. Nothing was released; reload and read it again.')
  const step = mustBeNextVersion(request, newest, prepared.proposal)
  const peers = await em.find(Signature, { change, round: change.round, meaning: 'peer review' }, { orderBy: { id: 'asc' } })
  change.machine.lastSequence = prepared.sequence
  const by = em.getReference(Person, person.id)
  const release = em.create(Release, {
    machine: change.machine, version: request.version, sequence: prepared.sequence, changeNumber: change.number, changeTitle: change.title, reason: change.reason, set: prepared.content.set,
    contentHash: prepared.content.hash, content: prepared.content.text, proposedStep: prepared.proposal.step, step, stepReason: request.stepReason, releasedBy: by, releasedAt: now,
  })
  const joints = await keepIdentities(em, change.machine, prepared.content.set, now)
  await writeJoints(em, release, prepared.content, prepared.joints, joints, now)
  const hash = releaseHash(request, prepared.sequence, peers)
  em.create(Signature, { change, round: change.round, meaning: 'release', statement: statements.release, person: by, personName: person.name, at: now, contentHash: hash })
  markReleased(change, now)
  await addEvent(em, change, { kind: 'released', person, at: now, note: request.version, details: { contentHash: prepared.content.hash, releaseHash: hash, version: request.version, sequence: prepared.sequence } })
  await appendEntry(em, { at: now, person, act: 'release made', subject: { machine: change.machine.key, release: request.version }, details: { sequence: prepared.sequence, contentHash: prepared.content.hash, images: Object.fromEntries(prepared.joints.map((j) => [j.joint, j.sha256])) } })
  for (const writer of await em.find(Person, { id: { $in: change.writers } }))
    queueMail(em, { person: writer, subject: `Released: ${change.machine.name} ${request.version}`, text: `${person.name} released change ${change.machine.key}-${change.number}, "${change.title}", as ${change.machine.name} ${request.version} (sequence number ${prepared.sequence}).\n`, now })
  return release
}
