import type { EntityManager } from '@mikro-orm/core'
import type { JointView, ParameterValue } from '../../../shared/contract/machines.ts'
import { effectiveValues } from '../../../shared/parameters/effective.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { RegisterRow } from '../../../shared/registers/encode-image.ts'
import type { Parameter, ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { resolveJoint, type ResolvedJoint } from '../checks/resolve-joint.ts'
import { limitsOf } from '../firmware/present.ts'
import { DomainError } from '../../http/errors.ts'
import { ReleaseJoint } from '../releases/release-joint.entity.ts'
import { driveTrainNumber, driveTrainsOf } from './drive-trains.ts'
import type { Machine } from './machine.entity.ts'
import { openChanges } from './open-changes.ts'
import { shownWithSchemas } from './shown-set.ts'
import { numberedJoints, summariseJoint, waitingAt } from './summarise.ts'

const hex = (bytes: Uint8Array) => [...bytes].map((b) => b.toString(16).toUpperCase().padStart(2, '0')).join(' ')

function presentValue(set: MachineSet, joint: string, p: Parameter, row: RegisterRow | undefined): ParameterValue[] {
  const family = set.families[set.joints[joint].family]
  return effectiveValues(set, joint, [p]).map((effective) => ({
    ...effective,
    title: p.title,
    description: p.description,
    unit: p.unit ?? '',
    role: p.role,
    boardBound: p.boardBound,
    ...limitsOf(p),
    familyValue: Object.hasOwn(family.values, p.name) ? family.values[p.name] : null,
    firmwareDefault: p.default,
    register: p.register && { address: p.register.address, encoding: p.register.encoding.name, access: p.register.access, bit: p.register.bit, width: p.register.width },
    bytes: row ? hex(row.bytes) : '',
    physical: row?.physical ?? null,
    errorAbsolute: row?.errorAbsolute ?? null,
    errorRelative: row?.errorRelative ?? null,
  }))
}

/** Every effective value of a joint in the schema's order; read-only registers have none. */
function presentValues(set: MachineSet, joint: string, schema: ParameterSchema | undefined, resolved: ResolvedJoint): ParameterValue[] {
  const rows = new Map(resolved.kind === 'resolved' ? resolved.encoded.rows.map((r) => [r.parameter, r]) : [])
  return (schema?.parameters ?? []).flatMap((p) => (p.register?.access === 'ro' ? [] : presentValue(set, joint, p, rows.get(p.name))))
}

/** Revisions of a joint, newest first, each with the release that brought it. */
async function historyOf(em: EntityManager, machine: Machine, joint: string): Promise<JointView['history']> {
  const rows = await em.find(ReleaseJoint, { joint: { machine, key: joint } }, {
    populate: ['release', 'revision'],
    fields: ['revision.number', 'release.version', 'release.sequence', 'release.releasedAt', 'release.changeNumber', 'release.changeTitle'],
    orderBy: { release: { sequence: 'asc' } },
  })
  const brought = rows.filter((r, i) => rows.findIndex((other) => other.revision.number === r.revision.number) === i)
  return brought.reverse().map(({ revision, release }) => ({
    revision: revision.number,
    release: release.version,
    sequence: release.sequence,
    at: release.releasedAt.toISOString(),
    change: `${machine.key}-${release.changeNumber}`,
    title: release.changeTitle,
  }))
}

/** @throws DomainError not-found when the shown release has no such joint */
export async function presentJoint(em: EntityManager, machine: Machine, key: string): Promise<JointView> {
  const { release, shown, set, firmware } = await shownWithSchemas(em, machine)
  if (!shown || !Object.hasOwn(set.joints, key)) throw new DomainError('not-found', `${machine.name} has no joint "${key}" in its newest release. Joints come with releases: look at the machine's page, or at its changes.`)
  const settings = set.joints[key]
  const schema = firmware.schemas[settings.firmware]
  const numbered = await numberedJoints(em, release)
  const resolved = resolveJoint(set, key, new Map(Object.entries(firmware.schemas)), shown.sequence)
  return {
    ...summariseJoint({ set, schemas: firmware.schemas, numbered, waiting: await waitingAt(em, await openChanges(em, machine)) }, key),
    machine: machine.key,
    machineName: machine.name,
    shown,
    settings,
    familySettings: set.families[settings.family],
    busSettings: set.buses[settings.bus],
    driveTrain: set.families[settings.family].driveTrain,
    driveTrainNumber: driveTrainNumber(set, settings.family, await driveTrainsOf(em, machine)),
    values: presentValues(set, key, schema, resolved),
    problems: resolved.kind === 'refused' ? resolved.problems : [],
    imageSha256: numbered.get(key)?.imageSha256 ?? null,
    history: await historyOf(em, machine, key),
  }
}
