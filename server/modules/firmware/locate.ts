import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Place } from '../../http/route.ts'
import { FirmwareLine } from './firmware-line.entity.ts'
import { firmwareName, FirmwareVersion } from './firmware-version.entity.ts'

/** Firmware is not tied to a machine: whoever reads anything reads it. */
export interface OnLine extends Place {
  line: FirmwareLine
}

export interface OnVersion extends Place {
  version: FirmwareVersion
}

/** @throws DomainError not-found */
export async function onLine(em: EntityManager, params: Record<string, string>): Promise<OnLine> {
  const line = await em.findOne(FirmwareLine, { key: params.line })
  if (!line) throw new DomainError('not-found', `There is no firmware line "${params.line}". Check the address; the firmware page lists every line.`)
  return { machine: null, subject: { firmware: line.key }, line }
}

const people = ['line', 'uploadedBy', 'publishedBy', 'retiredBy'] as const

/** @throws DomainError not-found */
export async function onVersion(em: EntityManager, params: Record<string, string>): Promise<OnVersion> {
  const { line } = await onLine(em, params)
  const version = await em.findOne(FirmwareVersion, { line, version: params.version }, { populate: people })
  if (!version) throw new DomainError('not-found', `The firmware line ${line.key} has no version ${params.version}. Check the address; the firmware page lists every version.`)
  return { machine: null, subject: { firmware: firmwareName(version) }, version }
}

/** The same version, fresh inside an act's transaction. */
export const again = (em: EntityManager, version: FirmwareVersion): Promise<FirmwareVersion> =>
  em.findOneOrFail(FirmwareVersion, { id: version.id }, { populate: people, refresh: true })
