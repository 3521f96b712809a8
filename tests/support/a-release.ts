import type { EntityManager } from '@mikro-orm/core'
import { resolveJoint, sha256, type ResolvedJoint } from '../../server/modules/checks/resolve-joint.ts'
import { schemasFor } from '../../server/modules/firmware/schemas-for.ts'
import { hashOf } from '../../server/modules/firmware/schema-cache.ts'
import { Machine } from '../../server/modules/machines/machine.entity.ts'
import { Person } from '../../server/modules/people/person.entity.ts'
import { foundPolicy } from '../../server/modules/policy/found-policy.ts'
import { keepIdentities } from '../../server/modules/releases/keep-identities.ts'
import { ReleaseJoint } from '../../server/modules/releases/release-joint.entity.ts'
import { Release } from '../../server/modules/releases/release.entity.ts'
import { Revision } from '../../server/modules/releases/revision.entity.ts'
import { Withdrawal } from '../../server/modules/releases/withdrawal.entity.ts'
import type { RevisionContent } from '../../shared/contract/releases.ts'
import type { ConcessionRequest } from '../../shared/contract/changes.ts'
import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import { aFirmware } from './a-firmware.ts'
import { aSet } from './a-set.ts'
import type { Workplace } from './workplace.ts'

/** Puts a machine with its first policy straight into the database, or finds the one with this key. */
export async function aMachine(w: Workplace, key = 'dunlin', name = key[0].toUpperCase() + key.slice(1)): Promise<Machine> {
  const em = w.orm.em.fork()
  const found = await em.findOne(Machine, { key })
  if (found) return found
  const machine = em.create(Machine, { key, name, description: `${name} for tests`, createdAt: w.services.now() })
  foundPolicy(em, machine, w.services.now())
  await em.flush()
  return machine
}

export interface ReleaseToMake {
  machine?: string
  version?: string
  set?: MachineSet
  title?: string
  releasedBy?: Person
  /** the reason, when it was withdrawn */
  withdrawn?: string
  /** that it stands on, as its signed content has them */
  concessions?: ConcessionRequest[]
}

/**
 * Puts a release straight into the database with everything a release act leaves: identities, drive trains, revisions, encoded images.
 * No change, signature or ledger entry belongs to it. Firmware named "hinge 2.1.0" is made from the small schema when it is missing.
 */
export async function aRelease(w: Workplace, { machine: key = 'dunlin', version = '1.0.0', set = aSet(), title = `Release ${version}`, releasedBy, withdrawn, concessions }: ReleaseToMake = {}): Promise<Release> {
  await aMachine(w, key)
  const em = w.orm.em.fork()
  const now = w.services.now()
  if ((await schemasFor(em, set)).problems.some((p) => p.firmware === 'hinge 2.1.0')) await aFirmware(w)
  const person = em.getReference(Person, (releasedBy ?? (await w.person('Release Signer', [['release manager', null]]))).id)
  const machine = await em.findOneOrFail(Machine, { key })
  machine.lastSequence += 1
  machine.lastChange += 1
  const content = JSON.stringify({ set, ...(concessions ? { concessions } : {}) })
  const release = em.create(Release, {
    machine, version, sequence: machine.lastSequence, changeNumber: machine.lastChange, changeTitle: title, reason: 'Made for a test.', set, content, contentHash: sha256(content),
    proposedStep: 'minor', step: 'minor', stepReason: '', releasedBy: person, releasedAt: now,
  })
  await buildJoints(em, { machine, release, set, now })
  if (withdrawn !== undefined) em.create(Withdrawal, { release, person, at: now, reason: withdrawn })
  await em.flush()
  return release
}

interface Building {
  machine: Machine
  release: Release
  set: MachineSet
  now: Date
}

async function buildJoints(em: EntityManager, { machine, release, set, now }: Building) {
  const { schemas, hashes } = await schemasFor(em, set)
  const joints = await keepIdentities(em, machine, set, now)
  await em.flush()
  for (const [key, settings] of Object.entries(set.joints)) {
    const resolve = (sequence: number) => resolvedOrThrow(resolveJoint(set, key, new Map(Object.entries(schemas)), sequence))
    const unreleased = resolve(0)
    const contents: RevisionContent = {
      family: settings.family, bus: settings.bus, address: settings.address, firmware: settings.firmware, schemaHash: hashes[settings.firmware], values: unreleased.values,
      driveTrain: set.families[settings.family].driveTrain, board: settings.board ?? null, imageSha256: unreleased.imageSha256,
    }
    const joint = joints.get(key)!
    const [last] = await em.find(Revision, { joint }, { orderBy: { number: 'desc' }, limit: 1 })
    const contentHash = hashOf(contents)
    const revision = last?.contentHash === contentHash ? last : em.create(Revision, { joint, number: (last?.number ?? 0) + 1, content: contents, contentHash, createdAt: now })
    const { encoded, imageSha256 } = resolve(release.sequence)
    em.create(ReleaseJoint, { release, joint, revision, image: encoded.image, imageSha256 })
  }
}

function resolvedOrThrow(resolved: ResolvedJoint) {
  if (resolved.kind === 'refused') throw new Error(resolved.problems.map((p) => `${p.pointer}: ${p.detail}`).join('\n'))
  return resolved
}
