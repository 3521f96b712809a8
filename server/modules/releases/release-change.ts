import type { KeyObject } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import canonicalize from 'canonicalize'
import { statements } from '../../../shared/contract/reviews.ts'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { addEvent } from '../changes/add-event.ts'
import { markReleased, type Change } from '../changes/change.entity.ts'
import { inState } from '../changes/permissions.ts'
import { resolveJoint, sha256, type ResolvedJoint } from '../checks/resolve-joint.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { newestKey } from '../keys/workplace-keys.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { keepCheckpoint } from '../ledger/keep-checkpoint.ts'
import { newestRelease } from '../machines/current-release.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { Person } from '../people/person.entity.ts'
import type { Content } from '../reviews/content-of.ts'
import { mustBeAnother, mustBeReady } from '../reviews/may-sign.ts'
import { Signature } from '../reviews/signature.entity.ts'
import { buildKit, type BuiltKit } from './build-kit.ts'
import { firmwareFilesOf } from './firmware-files.ts'
import { keepIdentities } from './keep-identities.ts'
import { mustBeNextVersion } from './next-version.ts'
import { prepareJoints, type PreparedJoint } from './prepare-release.ts'
import { proposeVersion, stepOf, type Resolved } from './propose-version.ts'
import { ReleaseJoint } from './release-joint.entity.ts'
import { ReleaseKit } from './release-kit.entity.ts'
import { Release } from './release.entity.ts'
import { revisionNumbers, revisionsFor } from './revisions.ts'

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

const peersOf = (em: EntityManager, change: Change) => em.find(Signature, { change, round: change.round, meaning: 'peer review' }, { orderBy: { id: 'asc' } })

/** What the release signature binds to: the content, and what the release adds to it. */
const releaseHash = (request: ReleaseRequest, sequence: number, peers: readonly Signature[]) =>
  sha256(canonicalize({ contentHash: request.contentHash, version: request.version, sequence, stepReason: request.stepReason, peerSignatures: peers.map((s) => ({ person: s.personName, at: s.at.toISOString(), contentHash: s.contentHash })) })!)

/** Everything slow of a release, done and proven before its transaction. */
export interface Prepared {
  content: Content
  sequence: number
  proposal: Awaited<ReturnType<typeof proposalFor>>
  joints: PreparedJoint[]
  revisions: Map<string, number>
  releaseHash: string
  kit: BuiltKit
  /** the workplace's key that signed the kit, and signs the ledger's end with the release */
  key: KeyObject
}

/**
 * The slow half of a release, before any transaction: encodes everything for the next sequence number and proves it, reads the firmware
 * images, makes every file, signs the manifest, and proves the finished kit.
 *
 * @throws DomainError version-refused, verification-failed; nothing is written
 */
export async function prepare({ files, keys }: Pick<Services, 'files' | 'keys'>, em: EntityManager, change: Change, content: Content, request: ReleaseRequest): Promise<Prepared> {
  const proposal = await proposalFor(em, change, content)
  mustBeNextVersion(request, change.baseRelease?.version ?? null, proposal)
  const sequence = change.machine.lastSequence + 1
  const joints = await prepareJoints(content, sequence)
  const revisions = await revisionNumbers(em, change.machine, content)
  const peers = await peersOf(em, change)
  const hash = releaseHash(request, sequence, peers)
  const kit = await buildKit({
    machine: change.machine,
    release: { version: request.version, sequence, releasedAt: request.now.toISOString(), reason: change.reason },
    content, joints, revisions,
    concessions: change.concessions,
    firmware: await firmwareFilesOf(em, files, content.set),
    signatures: [
      ...peers.map((s) => ({ person: s.personName, meaning: s.meaning, signedAt: s.at.toISOString(), contentHash: s.contentHash })),
      { person: request.person.name, meaning: 'release', signedAt: request.now.toISOString(), contentHash: hash },
    ],
    key: keys.current,
  })
  return { content, sequence, proposal, joints, revisions, releaseHash: hash, kit, key: keys.current }
}

async function writeJoints(em: EntityManager, release: Release, { content, joints: prepared, revisions }: Prepared, now: Date) {
  const joints = await keepIdentities(em, release.machine, content.set, now)
  // New joints get their ids, by which their revisions are looked for.
  await em.flush()
  const made = await revisionsFor(em, joints, content, now)
  for (const p of prepared) {
    const joint = joints.get(p.joint)!
    const revision = made.get(p.joint)!
    if (revision.number !== revisions.get(p.joint)) throw moved()
    em.create(ReleaseJoint, { release, joint, revision, image: p.encoded.image, imageSha256: p.sha256 })
  }
}

const moved = () => new DomainError('content-differs', 'The change moved while you signed. Nothing was released; reload and read it again.')

/**
 * Signs second, and releases: revisions, release, signed manifest, ledger entries with a checkpoint, and mails in one transaction, or nothing.
 *
 * The signer's password was re-entered before, and everything slow was prepared; the hashes are checked again here.
 *
 * @throws DomainError wrong-state (rows unread and comments open included), own-work, base-outdated, content-differs, version-refused
 */
export async function releaseChange(em: EntityManager, change: Change, prepared: Prepared, request: ReleaseRequest): Promise<Release> {
  const { person, now } = request
  const { content, sequence } = prepared
  const open = inState(change, 'approved')
  if (!open.allowed) throw new DomainError('wrong-state', `${open.why} Only an approved change is released. Nothing was released.`)
  await mustBeAnother(em, change, person)
  const rowsRead = await mustBeReady(em, change, person, now)
  const newest = await newestRelease(em, change.machine)
  if ((newest?.id ?? null) !== (change.baseRelease?.id ?? null)) throw new DomainError('base-outdated', `Release ${newest?.version} came meanwhile. Nothing was released; the change has to be brought up to date and signed again.`)
  if (change.contentHash !== content.hash || request.contentHash !== content.hash || change.machine.lastSequence + 1 !== sequence) throw moved()
  const step = mustBeNextVersion(request, newest?.version ?? null, prepared.proposal)
  const hash = releaseHash(request, sequence, await peersOf(em, change))
  const { signed, zipBytes } = prepared.kit
  const key = await newestKey(em)
  if (hash !== prepared.releaseHash || key?.publicKey !== signed.publicKey) throw moved()
  change.machine.lastSequence = sequence
  const by = em.getReference(Person, person.id)
  const release = em.create(Release, {
    machine: change.machine, version: request.version, sequence, changeNumber: change.number, changeTitle: change.title, reason: change.reason, set: content.set,
    contentHash: content.hash, content: content.text, proposedStep: prepared.proposal.step, step, stepReason: request.stepReason, releasedBy: by, releasedAt: now,
  })
  await writeJoints(em, release, prepared, now)
  const manifestSha256 = sha256(signed.manifest)
  em.create(ReleaseKit, { release, ...signed, manifestSha256, keyId: key.keyId, zipBytes })
  em.create(Signature, { change, round: change.round, meaning: 'release', statement: statements.release, person: by, personName: person.name, at: now, contentHash: hash })
  markReleased(change, now)
  await addEvent(em, change, { kind: 'released', person, at: now, note: request.version, details: { contentHash: content.hash, releaseHash: hash, version: request.version, sequence, rowsRead } })
  await appendEntry(em, { at: now, person, act: 'release made', subject: { machine: change.machine.key, release: request.version }, details: { sequence, contentHash: content.hash, manifestSha256, keyId: key.keyId, images: Object.fromEntries(prepared.joints.map((j) => [j.joint, j.sha256])) } })
  await keepCheckpoint(em, { key: prepared.key, now, occasion: 'release' })
  for (const writer of await em.find(Person, { id: { $in: change.writers } }))
    queueMail(em, { person: writer, topic: 'release', subject: `Released: ${change.machine.name} ${request.version}`, text: `${person.name} released change ${change.machine.key}-${change.number}, "${change.title}", as ${change.machine.name} ${request.version} (sequence number ${sequence}).\n`, now })
  return release
}
