import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Place } from '../../http/route.ts'
import { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { Release } from '../releases/release.entity.ts'
import { Board, serialKey } from './board.entity.ts'

export interface OnBoard extends Place {
  machine: string
  board: Board
}

export const findBoard = (em: EntityManager, serial: string): Promise<Board | null> =>
  em.findOne(Board, { serialKey: serialKey(serial) }, { populate: ['machine', 'joint', 'imageOf', 'release'] }) as Promise<Board | null>

/** The board that a path names as `:serial`. @throws DomainError not-found */
export async function onBoard(em: EntityManager, params: Record<string, string>): Promise<OnBoard> {
  const board = await findBoard(em, params.serial)
  if (!board) throw new DomainError('not-found', 'There is nothing at this address that you may read. Check the address, or ask an administrator for a role on the machine.')
  return { machine: board.machine.key, subject: { machine: board.machine.key, board: board.serial }, board }
}

/** @throws DomainError invalid-request naming the field */
export const jointNamed = async (em: EntityManager, machine: Machine, key: string, pointer: string): Promise<Joint> =>
  (await em.findOne(Joint, { machine, key, retiredAt: null })) ?? noJoint(machine, key, pointer)

/** @throws DomainError invalid-request naming the field, always */
export function noJoint(machine: Machine, key: string, pointer: string): never {
  throw new DomainError('invalid-request', `${machine.name} has no joint "${key}". Nothing was recorded; the machine's page lists its joints.`, { fields: [{ pointer, detail: `is no joint of ${machine.name}` }] })
}

/** @throws DomainError invalid-request naming the field */
export async function releaseNamed(em: EntityManager, machine: Machine, version: string, pointer: string): Promise<Release> {
  const release = await em.findOne(Release, { machine, version }, { populate: ['machine'] })
  if (!release) throw new DomainError('invalid-request', `${machine.name} has no release ${version}. Nothing was recorded; the releases page lists every one.`, { fields: [{ pointer, detail: `is no release of ${machine.name}` }] })
  return release as Release
}

/** Firmware of a joint in a release. @throws DomainError invalid-request when the release left the joint out */
export function firmwareIn(release: Release, joint: Joint, pointer: string): string {
  const settings = release.set.joints[joint.key]
  if (!settings) throw new DomainError('invalid-request', `Release ${release.version} has no joint "${joint.key}". Nothing was recorded.`, { fields: [{ pointer, detail: `is not in ${release.version}` }] })
  return settings.firmware
}
