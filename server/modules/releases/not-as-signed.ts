import { DomainError } from '../../http/errors.ts'
import type { Release } from './release.entity.ts'

/** Something of a release is not what was signed. It is never handed out, and the refusal goes into the ledger. */
export const notAsSigned = (release: Pick<Release, 'machine' | 'version'>, what: string, why: string) =>
  new DomainError('verification-failed', `${what} of ${release.machine.name} ${release.version} is not what was signed: ${why} It was not handed out; restore it from a backup before anything is flashed.`, { recorded: true })
