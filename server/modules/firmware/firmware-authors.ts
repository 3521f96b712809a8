import type { EntityManager } from '@mikro-orm/core'
import { FirmwareVersion } from './firmware-version.entity.ts'

/** Splits a firmware name such as "hinge 2.1.0" into line and version. */
export function splitFirmwareName(name: string): { line: string; version: string } {
  const at = name.indexOf(' ')
  return { line: name.slice(0, at), version: name.slice(at + 1) }
}

/** The versions of these names that exist, with their lines. */
export function versionsNamed(em: EntityManager, names: readonly string[]): Promise<FirmwareVersion[]> {
  const wanted = names.map(splitFirmwareName).map(({ line, version }) => ({ line: { key: line }, version }))
  return wanted.length === 0 ? Promise.resolve([]) : em.find(FirmwareVersion, { $or: wanted }, { populate: ['line'] })
}

/** Ids of the people who wrote in or published these versions: each counts as an author of a change that moves a joint to one of them. */
export async function firmwareAuthors(em: EntityManager, names: readonly string[]): Promise<number[]> {
  const versions = await versionsNamed(em, names)
  return [...new Set(versions.flatMap((v) => [...v.writers, ...(v.publishedBy ? [v.publishedBy.id] : [])]))]
}
