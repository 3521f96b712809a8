import { createPublicKey } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import { EXPORTER_VERSION } from '../../exports/export-context.ts'
import type { SignedManifest } from '../../exports/kit.ts'
import type { ManifestInput } from '../../exports/manifest.ts'
import { sha256 } from '../../exports/record.ts'
import { keyId, verifyText } from '../../exports/sign-manifest.ts'
import { WorkplaceKey } from '../keys/workplace-key.entity.ts'
import { notAsSigned } from './not-as-signed.ts'
import { ReleaseKit } from './release-kit.entity.ts'
import type { Release } from './release.entity.ts'

/** The signed manifest of a release as stored, proven by the workplace's public key. */
export interface SignedKit {
  signed: SignedManifest
  /** SHA-256 by path */
  digests: ReadonlyMap<string, string>
  /** version of Detent that made the files */
  toolVersion: string
  release: ManifestInput['release']
}

interface Statement {
  subject: { name: string; digest: { sha256: string } }[]
  predicate: { tool: { version: string }; exporter: number; release: ManifestInput['release'] }
}

/**
 * What a release's kit was signed as; null for a release made before kits were kept.
 *
 * @throws DomainError verification-failed when manifest, signature or key are not what the workplace made
 */
export async function signedKitOf(em: EntityManager, release: Release): Promise<SignedKit | null> {
  const kit = await em.findOne(ReleaseKit, { release }, { populate: ['manifest', 'signature', 'envelope', 'sumsSignature'] as never })
  if (!kit) return null
  const refuse = (why: string): never => {
    throw notAsSigned(release, 'The manifest', why)
  }
  const publicKey = createPublicKey(kit.publicKey)
  const signature = new Uint8Array(kit.signature)
  if (sha256(kit.manifest) !== kit.manifestSha256) refuse('its stored text does not match its SHA-256.')
  if (keyId(publicKey) !== kit.keyId || (await em.count(WorkplaceKey, { keyId: kit.keyId })) === 0) refuse('it bears a key that is none of the workplace.')
  if (!verifyText(kit.manifest, signature, publicKey)) refuse('its signature does not hold.')
  const { subject, predicate } = JSON.parse(kit.manifest) as Statement
  if (predicate.exporter !== EXPORTER_VERSION) refuse(`its files have the form ${predicate.exporter}, which this version of Detent cannot make.`)
  return {
    signed: { manifest: kit.manifest, signature, envelope: kit.envelope, sumsSignature: new Uint8Array(kit.sumsSignature), publicKey: kit.publicKey },
    digests: new Map(subject.map((s) => [s.name, s.digest.sha256])),
    toolVersion: predicate.tool.version,
    release: predicate.release,
  }
}
