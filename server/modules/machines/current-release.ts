import type { EntityManager } from '@mikro-orm/core'
import { Release } from '../releases/release.entity.ts'
import { Withdrawal } from '../releases/withdrawal.entity.ts'
import type { Machine } from './machine.entity.ts'

/** The release of a machine with the highest sequence number, withdrawn or not; null before the first. */
export async function newestRelease(em: EntityManager, machine: Machine): Promise<Release | null> {
  const [newest] = await em.find(Release, { machine }, { orderBy: { sequence: 'desc' }, limit: 1 })
  return newest ?? null
}

export const isWithdrawn = async (em: EntityManager, release: Release): Promise<boolean> => (await em.count(Withdrawal, { release })) > 0

/** The release that boards of the machine should hold: the newest, unless it was withdrawn. A withdrawal brings no older release back. */
export async function currentRelease(em: EntityManager, machine: Machine): Promise<Release | null> {
  const newest = await newestRelease(em, machine)
  return newest && !(await isWithdrawn(em, newest)) ? newest : null
}
