import type { Services } from '../../server/http/services.ts'
import { faultsOf, type AskCopy } from '../../server/db/read-copy.ts'
import { proveReleases } from '../../server/modules/backups/prove-releases.ts'
import { referencedFiles } from '../../server/modules/backups/referenced-files.ts'
import { Change } from '../../server/modules/changes/change.entity.ts'
import { LedgerEntry } from '../../server/modules/ledger/ledger-entry.entity.ts'
import { verifyOwnCheckpoints } from '../../server/modules/ledger/verify-checkpoints.ts'
import { verifyLedger } from '../../server/modules/ledger/verify-ledger.ts'
import { Machine } from '../../server/modules/machines/machine.entity.ts'
import { ReleaseJoint } from '../../server/modules/releases/release-joint.entity.ts'
import { ReleaseKit } from '../../server/modules/releases/release-kit.entity.ts'
import { Release } from '../../server/modules/releases/release.entity.ts'
import { Signature } from '../../server/modules/reviews/signature.entity.ts'
import type { Summary } from './protocol.ts'

const asker = ({ orm }: Services): AskCopy => (sql) => orm.em.getConnection().execute(sql)

export async function summary(services: Services): Promise<Summary> {
  const ask = asker(services)
  const count = async (from: string) => (await ask<{ n: number }>(`select count(*) as n from ${from}`))[0].n
  return {
    entries: await count('ledger_entry'),
    releases: await count('release'),
    signatures: await count('signature'),
    checkpoints: await count('ledger_checkpoint'),
    receipts: await count('receipt'),
    firmwareImages: await count('firmware_version where image_sha256 is not null'),
  }
}

/** A release is there whole: its change, both signatures, joints, kit, ledger entry; its number once. */
async function releaseFaults({ orm }: Services): Promise<string[]> {
  const em = orm.em.fork()
  const faults: string[] = []
  const releases = await em.find(Release, {}, { populate: ['machine'] })
  const made = await em.find(LedgerEntry, { act: 'release made' })
  if (made.length !== releases.length) faults.push(`${releases.length} releases, ${made.length} entries of them`)
  for (const release of releases) {
    const name = `release ${release.version}`
    const joints = await em.count(ReleaseJoint, { release })
    if (joints !== Object.keys(release.set.joints).length) faults.push(`${name} has ${joints} joints`)
    if ((await em.count(ReleaseKit, { release })) !== 1) faults.push(`${name} has no kit`)
    const change = await em.findOneOrFail(Change, { machine: release.machine, number: release.changeNumber })
    if (change.state !== 'released') faults.push(`${name} is there, its change is ${change.state}`)
    const signatures = await em.find(Signature, { change, round: change.round })
    if (signatures.map((s) => s.meaning).sort().join() !== 'peer review,release') faults.push(`${name} bears ${signatures.length} signatures`)
    if (new Set(signatures.map((s) => s.person.id)).size !== 2) faults.push(`${name} was signed by one person`)
  }
  for (const machine of await em.find(Machine, {})) {
    const sequences = releases.filter((r) => r.machine.id === machine.id).map((r) => r.sequence).sort((a, b) => a - b)
    if (sequences.some((s, i) => s !== i + 1) || machine.lastSequence !== sequences.length) faults.push(`sequence numbers ${sequences.join()}, the last given is ${machine.lastSequence}`)
  }
  for (const change of await em.find(Change, { state: 'released' }, { populate: ['machine'] }))
    if (!releases.some((r) => r.machine.id === change.machine.id && r.changeNumber === change.number)) faults.push(`change ${change.number} is released, its release is not there`)
  for (const change of await em.find(Change, { state: { $in: ['submitted', 'approved'] } })) {
    const peers = await em.count(Signature, { change, round: change.round, meaning: 'peer review' })
    if (peers !== (change.state === 'approved' ? 1 : 0)) faults.push(`change ${change.number} is ${change.state} with ${peers} peer reviews`)
  }
  return faults
}

/** Everything that must hold in a database, whatever moment the process before was killed at. */
export async function faultsIn(services: Services): Promise<string[]> {
  const em = services.orm.em.fork()
  const ask = asker(services)
  const faults = await faultsOf(ask)
  const chain = await verifyLedger(em)
  if (!chain.holds) faults.push(`the ledger breaks at ${chain.sequence}: ${chain.why}`)
  const checkpoints = await verifyOwnCheckpoints(em)
  if (!checkpoints.holds) faults.push(`checkpoint ${checkpoints.line}: ${checkpoints.why}`)
  faults.push(...(await releaseFaults(services)))
  for (const sha256 of await referencedFiles(ask)) await services.files.read(sha256).catch((error: Error) => faults.push(error.message))
  await proveReleases(em, services.files).catch((error: Error) => faults.push(error.message))
  return faults
}
