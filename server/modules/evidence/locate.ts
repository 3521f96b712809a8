import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Place } from '../../http/route.ts'
import { changeKey, onChange, type OnChange } from '../changes/locate.ts'
import { readSet } from '../changes/read-set.ts'
import { onMachine } from '../machines/locate.ts'
import { shownSet } from '../machines/shown-set.ts'
import { Evidence } from './evidence.entity.ts'

export interface OnEvidence extends Place {
  machine: string
  evidence: Evidence
}

const populate = ['machine', 'change', 'change.machine', 'change.author', 'change.baseRelease'] as const

export const findEvidence = (em: EntityManager, machine: number, number: number): Promise<Evidence | null> => em.findOne(Evidence, { machine, number }, { populate: [...populate] }) as Promise<Evidence | null>

export const subjectOf = (evidence: Evidence) => ({ machine: evidence.machine.key, joint: evidence.jointKey, ...(evidence.change ? { change: changeKey(evidence.change) } : {}) })

/** The log that a path names as `:machine/evidence/:evidence`. @throws DomainError not-found */
export async function onEvidence(em: EntityManager, params: Record<string, string>): Promise<OnEvidence> {
  const { found: machine } = await onMachine(em, params)
  const evidence = /^[1-9]\d{0,8}$/.test(params.evidence) ? await findEvidence(em, machine.id, Number(params.evidence)) : null
  if (!evidence) throw new DomainError('not-found', 'There is no such bench log. Check the address; the page of the joint lists its logs.')
  return { machine: machine.key, subject: subjectOf(evidence), evidence }
}

/** The same log, fresh inside an act's transaction. */
export const again = (em: EntityManager, evidence: Evidence): Promise<Evidence> => em.findOneOrFail(Evidence, { id: evidence.id }, { populate: [...populate], refresh: true }) as Promise<Evidence>

const noJoint = (name: string, joint: string) => new DomainError('not-found', `${name} has no joint "${joint}". Nothing was kept; check the address.`)

/** A joint of the machine's newest release. @throws DomainError not-found */
export async function onReleasedJoint(em: EntityManager, params: Record<string, string>) {
  const at = await onMachine(em, params)
  const { set } = await shownSet(em, at.found)
  if (!Object.hasOwn(set.joints, params.joint)) throw noJoint(at.found.name, params.joint)
  return { ...at, subject: { machine: at.machine!, joint: params.joint } }
}

/** A joint as a change has it. @throws DomainError not-found */
export async function onJointOfChange(em: EntityManager, params: Record<string, string>): Promise<OnChange> {
  const at = await onChange(em, params)
  const read = readSet(at.change.text)
  if (read.ok && !Object.hasOwn(read.set.joints, params.joint)) throw noJoint(`Change ${at.change.number}`, params.joint)
  return at
}
