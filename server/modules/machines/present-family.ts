import type { EntityManager } from '@mikro-orm/core'
import type { FamilyView } from '../../../shared/contract/machines.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { Parameter, ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { DomainError } from '../../http/errors.ts'
import { driveTrainNumber, driveTrainsOf } from './drive-trains.ts'
import type { Machine } from './machine.entity.ts'
import { openChanges } from './open-changes.ts'
import { shownWithSchemas } from './shown-set.ts'
import { numberedJoints, summariseJoint, waitingAt } from './summarise.ts'

/** Parameters that a value can be given for, of every firmware version in the family; the first joint's version describes what several share. */
function parametersOf(set: MachineSet, joints: readonly string[], schemas: Readonly<Record<string, ParameterSchema>>): Map<string, Parameter> {
  const parameters = new Map<string, Parameter>()
  for (const joint of joints)
    for (const p of schemas[set.joints[joint].firmware]?.parameters ?? [])
      if (p.register && p.register.access !== 'ro' && p.role !== 'bus.address' && !parameters.has(p.name)) parameters.set(p.name, p)
  return parameters
}

function valuesAcross(set: MachineSet, family: string, joints: readonly string[], schemas: Readonly<Record<string, ParameterSchema>>): FamilyView['values'] {
  const shared = set.families[family].values
  const parameters = parametersOf(set, joints, schemas)
  const names = new Set([...parameters.keys(), ...Object.keys(shared), ...joints.flatMap((j) => Object.keys(set.joints[j].values))])
  return [...names].map((name) => {
    const p = parameters.get(name)
    return {
      name,
      title: p?.title ?? name,
      unit: p?.unit ?? '',
      role: p?.role ?? null,
      familyValue: Object.hasOwn(shared, name) ? shared[name] : null,
      firmwareDefault: p?.default ?? null,
      own: joints.flatMap((joint) => (Object.hasOwn(set.joints[joint].values, name) ? [{ joint, value: set.joints[joint].values[name] }] : [])),
    }
  })
}

/** @throws DomainError not-found when the shown release has no such family */
export async function presentFamily(em: EntityManager, machine: Machine, key: string): Promise<FamilyView> {
  const { release, shown, set, firmware } = await shownWithSchemas(em, machine)
  if (!shown || !Object.hasOwn(set.families, key)) throw new DomainError('not-found', `${machine.name} has no family "${key}" in its newest release. Families come with releases: look at the machine's page, or at its changes.`)
  const joints = Object.keys(set.joints).filter((j) => set.joints[j].family === key)
  const context = { set, schemas: firmware.schemas, numbered: await numberedJoints(em, release), waiting: await waitingAt(em, await openChanges(em, machine)) }
  const released = await driveTrainsOf(em, machine)
  return {
    machine: machine.key,
    machineName: machine.name,
    shown,
    key,
    settings: set.families[key],
    driveTrainNumber: driveTrainNumber(set, key, released),
    driveTrainHistory: (released.get(key) ?? []).map((d) => ({ number: d.number, at: d.createdAt.toISOString(), driveTrain: d.settings })),
    joints: joints.map((j) => summariseJoint(context, j)),
    values: valuesAcross(set, key, joints, firmware.schemas),
  }
}
