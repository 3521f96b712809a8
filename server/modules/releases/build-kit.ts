import type { KeyObject } from 'node:crypto'
import type { ConcessionRequest } from '../../../shared/contract/changes.ts'
import { jointFiles, packKit, signKit, type SignedManifest } from '../../exports/kit.ts'
import type { KitFile, ManifestInput, ManifestJoint } from '../../exports/manifest.ts'
import { verifyKit } from '../../exports/verify-kit.ts'
import { DomainError } from '../../http/errors.ts'
import { TOOL_VERSION } from '../../tool-version.ts'
import type { PackedCheck } from '../checks/pack-check.ts'
import { splitFirmwareName } from '../firmware/firmware-authors.ts'
import type { Content } from '../reviews/content-of.ts'
import { breathe } from './breathe.ts'
import type { FirmwareFiles } from './firmware-files.ts'
import type { PreparedJoint } from './prepare-release.ts'

export interface KitParts {
  machine: { key: string; name: string }
  release: Omit<ManifestInput['release'], 'machine' | 'contentHash'>
  content: Content
  concessions: readonly ConcessionRequest[]
  joints: readonly PreparedJoint[]
  revisions: ReadonlyMap<string, number>
  firmware: FirmwareFiles
  signatures: ManifestInput['signatures']
  /** the workplace's private key */
  key: KeyObject
}

export interface BuiltKit {
  signed: SignedManifest
  zipBytes: number
}

/** The verdict of each joint, from the content that was signed. */
function verdictsOf(content: Content): ManifestInput['verdicts'] {
  const { check } = JSON.parse(content.text) as { check: Pick<PackedCheck, 'inputsHash' | 'joints' | 'figures'> }
  return check.joints.map(({ joint, candidate }) => {
    const figures = candidate === null ? null : check.figures[candidate]
    return { joint, verdict: figures?.verdict ?? 'not analysed', rho: figures?.rho ?? null, check: check.inputsHash }
  })
}

function manifestJoint({ content, revisions, firmware }: KitParts, prepared: PreparedJoint): ManifestJoint {
  const { family, bus, address, firmware: name, board } = content.set.joints[prepared.joint]
  return {
    joint: prepared.joint, family, bus, address, revision: revisions.get(prepared.joint)!, imageSha256: prepared.sha256, board: board ?? null,
    firmware: { ...splitFirmwareName(name), schemaSha256: content.schemaHashes[name], imageSha256: firmware.hashes[name] ?? null },
  }
}

/**
 * Makes every file of a release, signs their manifest, and packs the kit once, to prove it whole before anything is written.
 *
 * @throws DomainError verification-failed when the finished kit does not verify
 */
export async function buildKit(parts: KitParts): Promise<BuiltKit> {
  const { machine, release, content, joints } = parts
  const files: KitFile[] = [...parts.firmware.files]
  for (const { joint, schema, encoded } of joints) {
    const { firmware, address } = content.set.joints[joint]
    files.push(...jointFiles(schema, encoded, { machine: machine.key, joint, firmware: splitFirmwareName(firmware), status: { kind: 'release', version: release.version, sequence: release.sequence }, device: address, toolVersion: TOOL_VERSION }))
    await breathe()
  }
  const { files: all, signed } = signKit(
    {
      toolVersion: TOOL_VERSION,
      release: { machine: machine.name, ...release, contentHash: content.hash },
      signatures: parts.signatures,
      verdicts: verdictsOf(content),
      concessions: [...parts.concessions],
      joints: joints.map((j) => manifestJoint(parts, j)),
      files,
    },
    parts.key,
  )
  await breathe()
  const zip = packKit(all, signed)
  await breathe()
  const verified = verifyKit(zip, signed.publicKey)
  if (verified.kind === 'refused') throw new DomainError('verification-failed', `The finished kit does not verify: ${verified.problems[0]} Nothing was released; report this.`)
  return { signed, zipBytes: zip.length }
}
