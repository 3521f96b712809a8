import type { EntityManager } from '@mikro-orm/core'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import type { CarryRules, ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { DomainError } from '../../http/errors.ts'
import { splitFirmwareName, versionsNamed } from './firmware-authors.ts'
import { firmwareName, type FirmwareVersion } from './firmware-version.entity.ts'
import { schemaOf } from './read-schema.ts'

/** The two versions of one line that a set is carried between; `to` has rules that start at `from`. */
export interface CarryVersions {
  from: ParameterSchema
  fromVersion: string
  fromName: string
  to: ParameterSchema
  toName: string
  rules: CarryRules
}

async function target(em: EntityManager, to: string): Promise<FirmwareVersion> {
  const found = /^\S+ \S+$/.test(to) ? (await versionsNamed(em, [to]))[0] : undefined
  if (!found) throw new DomainError('invalid-request', `There is no firmware version "${to}". Nothing was altered; the firmware page lists every one.`, { fields: [{ pointer: '/to', detail: 'is no firmware version' }] })
  if (found.state === 'retired') throw new DomainError('wrong-state', `${to} is retired; no joint moves to it. Nothing was altered.`, { fields: [{ pointer: '/to', detail: 'is retired' }] })
  return found
}

/**
 * The versions that these joints are carried between.
 *
 * @throws DomainError invalid-request, wrong-state, content-invalid naming each joint that the new version's rules don't start at
 */
export async function carryVersions(em: EntityManager, set: MachineSet, moving: readonly string[], to: string): Promise<CarryVersions> {
  const version = await target(em, to)
  const { schema } = schemaOf(version)
  const rules = schema.carry
  if (!rules) throw new DomainError('content-invalid', `${to} does not say how to carry a set over (x-carry). Nothing was altered; name the firmware of each joint by hand and correct its values.`, { fields: [{ pointer: '/to', detail: 'has no x-carry' }] })
  const fromName = `${version.line.key} ${rules.from}`
  const others = moving.filter((joint) => set.joints[joint].firmware !== fromName)
  if (others.length > 0)
    throw new DomainError('content-invalid', `${to} carries sets over from ${rules.from} alone. Nothing was altered; carry the joints named to ${fromName} first, or leave them out.`, {
      fields: others.map((joint) => ({ pointer: toPointer(['joints', joint, 'firmware']), detail: `${set.joints[joint].name} is on ${set.joints[joint].firmware}` })),
    })
  const [before] = await versionsNamed(em, [fromName])
  if (!before) throw new DomainError('content-invalid', `${to} carries sets over from ${rules.from}, which does not exist. Nothing was altered.`, { fields: [{ pointer: '/to', detail: `starts at ${rules.from}` }] })
  return { from: schemaOf(before).schema, fromVersion: splitFirmwareName(fromName).version, fromName, to: schema, toName: firmwareName(version), rules }
}
