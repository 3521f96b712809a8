import semver from 'semver'
import { versionSteps, type VersionProposal, type VersionStep } from '../../../shared/contract/releases.ts'
import { DomainError } from '../../http/errors.ts'
import { stepBetween } from './propose-version.ts'

/**
 * The step that a chosen version takes.
 *
 * @param newest  version of the machine's newest release; null for its first
 * @throws DomainError version-refused: no SemVer, not after the newest, or a lower step than proposed without a reason
 */
export function mustBeNextVersion(request: { version: string; stepReason: string }, newest: string | null, proposal: VersionProposal): VersionStep {
  const refuse = (detail: string): never => {
    throw new DomainError('version-refused', `Version ${request.version} can't be given: ${detail}. Nothing was released.`, { fields: [{ pointer: '/version', detail }] })
  }
  if (semver.valid(request.version) !== request.version) refuse('a version has the form 1.2.3 (SemVer 2.0.0)')
  if (semver.prerelease(request.version)) refuse('a release is no pre-release')
  if (newest === null) return proposal.step
  if (!semver.gt(request.version, newest)) refuse(`it does not come after ${newest}`)
  const step = stepBetween(newest, request.version)
  if (versionSteps.indexOf(step) < versionSteps.indexOf(proposal.step) && request.stepReason.trim() === '')
    throw new DomainError('version-refused', `${request.version} is a lower step than ${proposal.step}, which Detent proposes (${proposal.because[0]}). Say why, or take ${proposal.version}. Nothing was released.`, { fields: [{ pointer: '/stepReason', detail: 'a lower step than proposed needs a reason' }] })
  return step
}
