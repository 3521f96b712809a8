import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Place } from '../../http/route.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Release } from './release.entity.ts'

export interface OnRelease extends Place {
  machine: string
  release: Release
}

/**
 * The release that a path names as `:machine` and `:version`.
 *
 * @throws DomainError not-found
 */
export async function onRelease(em: EntityManager, params: Record<string, string>): Promise<OnRelease> {
  const machine = await em.findOne(Machine, { key: params.machine })
  const release = machine && (await em.findOne(Release, { machine, version: params.version }, { populate: ['machine', 'releasedBy'] }))
  if (!release) throw new DomainError('not-found', 'There is nothing at this address that you may read. Check the address, or ask an administrator for a role on the machine.')
  return { machine: release.machine.key, subject: { machine: release.machine.key, release: release.version }, release }
}
