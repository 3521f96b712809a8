import type { EntityManager } from '@mikro-orm/core'
import type { CommentPlace } from '../../../shared/contract/comments.ts'
import type { Finding } from '../../../shared/contract/checks.ts'
import { emptySet, type MachineSet } from '../../../shared/parameters/machine-set.ts'
import { fromPointer, valueAt } from '../../../shared/parameters/paths.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import type { Change } from '../changes/change.entity.ts'
import { setOf } from '../changes/read-set.ts'
import { assembleCheck } from '../checks/assemble-check.ts'
import { lookAtCheck } from '../checks/look-at-check.ts'
import { schemasFor } from '../firmware/schemas-for.ts'

const refuse = (pointer: string, detail: string) => new DomainError('content-invalid', `There is nothing in this change that the comment could hang on. Nothing was written; hang it on the whole change, or reload.`, { fields: [{ pointer, detail }] })

const kinds: Record<string, string> = { families: 'family', joints: 'joint', buses: 'bus' }
const settings: Record<string, string> = { name: 'name', family: 'family', bus: 'bus', address: 'address', firmware: 'firmware', board: 'board of the bound values', bitRate: 'bit rate', supply: 'supply', pullUp: 'pull-up', capacitance: 'capacitance', pollingRate: 'polling rate', bytesPerTransaction: 'bytes of a poll', otherDevices: 'other devices' }

/** "Velocity window, Knee family", "address, R3 knee": a place of either set in words. */
async function valueWords(em: EntityManager, sets: readonly MachineSet[], pointer: string): Promise<string> {
  const [kind, key, member, ...rest] = fromPointer(pointer)
  const set = Object.hasOwn(kinds, kind) ? sets.find((s) => valueAt(s, `/${kind}/${key ?? ''}`) !== undefined) : undefined
  if (!set) throw refuse('/on/pointer', 'names no family, joint or bus of this change or its base')
  const { name } = valueAt(set, `/${kind}/${key}`) as { name: string }
  const owner = kind === 'families' ? `${name} family` : kind === 'buses' ? `bus ${name}` : name
  if (member === undefined) return owner
  if (member === 'driveTrain' && kind === 'families' && rest.length === 1) return `${rest[0]} of the drive train, ${owner}`
  if (member === 'values' && kind !== 'buses' && rest.length === 1) {
    for (const s of sets)
      for (const schema of Object.values((await schemasFor(em, s)).schemas)) {
        const parameter = schema.byName.get(rest[0])
        if (parameter) return `${parameter.title}, ${owner}`
      }
    throw refuse('/on/pointer', `no firmware version of this change has the parameter ${rest[0]}`)
  }
  if (rest.length === 0 && Object.hasOwn(settings, member)) return `${settings[member]}, ${owner}`
  throw refuse('/on/pointer', 'names no value of this change')
}

const findingWords = (f: Finding) => [f.loop ? `${f.loop} ${f.kind}` : f.kind, f.joints.length > 0 ? f.joints.slice(0, 4).join(', ') + (f.joints.length > 4 ? ' and more' : '') : ''].filter(Boolean).join(', ')

/**
 * What a comment is to hang on, in words that read by themselves later.
 *
 * Slow where it is a finding: the check is looked at. So it stands before the transaction.
 *
 * @throws DomainError content-invalid where there is no such place
 */
export async function placeWords(services: Services, em: EntityManager, change: Change, place: CommentPlace, asker: number): Promise<string> {
  if (place.kind === 'change') return ''
  if (place.kind === 'value') return (await valueWords(em, [setOf(change.text), change.baseRelease?.set ?? emptySet()], place.pointer)).slice(0, 300)
  const look = await lookAtCheck(services, em, change, asker)
  const finding = assembleCheck(look.check, look.known).findings.find((f) => f.key === place.finding)
  if (!finding) throw refuse('/on/finding', 'is no finding of the check as it stands')
  return findingWords(finding).slice(0, 300)
}
