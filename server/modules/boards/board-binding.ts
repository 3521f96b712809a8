import type { EntityManager } from '@mikro-orm/core'
import type { Release } from '../releases/release.entity.ts'
import { Board, sameSerial } from './board.entity.ts'

/**
 * Why a joint's image of a release does not belong to the board there; null when it does.
 *
 * Values measured on one board belong to its serial number: once another board is recorded at the joint, or stands in the
 * builder's hand, the image is of no use to it until the values measured on the new board are released.
 *
 * @param inHand  serial number of the board to flash, when the builder named it
 */
export async function boardBindingProblem(em: EntityManager, release: Release, jointKey: string, inHand?: string): Promise<string | null> {
  const joint = release.set.joints[jointKey]
  if (!joint?.board) return null
  const recorded = await em.findOne(Board, { joint: { machine: release.machine, key: jointKey } })
  const there = inHand ?? recorded?.serial
  if (there === undefined || sameSerial(there, joint.board)) return null
  return `${joint.name} of ${release.version} holds values that were measured on board ${joint.board}, but ${inHand === undefined ? `${there} is recorded there` : `this is ${there}`}. Measure them on ${there} and release them first; if ${joint.board} sits there after all, record that.`
}
