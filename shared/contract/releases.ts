import { Type } from '@sinclair/typebox'
import type { EffectiveValue } from '../parameters/effective.ts'
import type { DriveTrain } from '../parameters/machine-set.ts'
import type { ConcessionRequest, SignatureView } from './changes.ts'
import type { Allowed } from './people.ts'

export const versionSteps = ['patch', 'minor', 'major'] as const
export type VersionStep = (typeof versionSteps)[number]

export const WithdrawRelease = Type.Object({ version: Type.String({ maxLength: 60 }), reason: Type.String({ minLength: 1, maxLength: 2000, pattern: '\\S' }) }, { additionalProperties: false })

/** What a revision freezes of a joint. */
export interface RevisionContent {
  family: string
  bus: string
  address: number
  firmware: string
  schemaHash: string
  values: EffectiveValue[]
  driveTrain: DriveTrain
  board: string | null
  /** of the image with release number 0 */
  imageSha256: string
}

/** What Detent proposes for the next version, and why. */
export interface VersionProposal {
  version: string
  step: VersionStep
  /** one sentence each, strongest first */
  because: string[]
}

export interface ReleaseSummary {
  machine: string
  machineName: string
  version: string
  sequence: number
  state: 'current' | 'superseded' | 'withdrawn'
  title: string
  change: string
  releasedBy: string
  releasedAt: string
  joints: number
}

export interface ReleaseJointView {
  joint: string
  name: string
  family: string
  bus: string
  address: number
  firmware: string
  revision: number
  /** the revision is new in this release */
  isNew: boolean
  imageSha256: string
  imageBytes: number
}

/** A concession that a release stands on, as it stands now. */
export interface StandingConcession extends ConcessionRequest {
  /** boards flashed with the release at the joints concerned, as recorded; null without a count */
  used: number | null
  /** one that is expired or used up stops the downloads */
  state: 'holds' | 'expired' | 'used up'
}

export interface ReleaseView extends ReleaseSummary {
  reason: string
  contentHash: string
  proposedStep: VersionStep
  step: VersionStep
  stepReason: string
  signatures: SignatureView[]
  concessions: StandingConcession[]
  items: ReleaseJointView[]
  withdrawal: { reason: string; by: string; at: string } | null
  /** the signed manifest that its kit proves itself by; null for a release made before kits were kept */
  kit: { manifestSha256: string; keyId: string; bytes: number } | null
  /** firmware versions of its joints whose firmware image lies in the kit */
  firmwareImages: string[]
  /** a download must say why: the release is superseded */
  needsReason: boolean
  /** joints whose files are refused, since another board sits there than the one they were measured on; the kit, which holds them, is refused too */
  unfit: { joint: string; name: string; why: string }[]
  may: { download: Allowed; withdraw: Allowed }
}
