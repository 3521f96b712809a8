import type { EntityManager } from '@mikro-orm/core'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { versionsNamed } from './firmware-authors.ts'
import { firmwareName, type FirmwareState } from './firmware-version.entity.ts'
import { schemaOf } from './read-schema.ts'

/** A joint whose firmware is not a published version. Whether a retired one stands in the way is the caller's to judge: an untouched joint may stay on it. */
export interface FirmwareProblem {
  /** into the machine set: "/joints/knee-1/firmware" */
  pointer: string
  joint: string
  firmware: string
  kind: 'unknown' | 'draft' | 'retired'
  /** one sentence */
  text: string
}

/** The schemas that a machine set names, by firmware name such as "hinge 2.1.0"; unknown names are missing in all three records. */
export interface SchemasFor {
  /** parsed schema documents: what the check's inputs carry */
  documents: Record<string, unknown>
  /** the same, read for the codec */
  schemas: Record<string, ParameterSchema>
  hashes: Record<string, string>
  states: Record<string, FirmwareState>
  problems: FirmwareProblem[]
}

const tellOf = (firmware: string, state: FirmwareState | undefined): Pick<FirmwareProblem, 'kind' | 'text'> | null => {
  switch (state) {
    case 'published':
      return null
    case 'draft':
      return { kind: 'draft', text: `${firmware} is a draft; a release manager publishes it before it is released to machines.` }
    case 'retired':
      return { kind: 'retired', text: `${firmware} is retired; move the joint to a published version.` }
    case undefined:
      return { kind: 'unknown', text: `There is no firmware version ${firmware}; the firmware page lists every one.` }
  }
}

/** Loads the parameter schema of every firmware version that a machine set names. */
export async function schemasFor(em: EntityManager, set: MachineSet): Promise<SchemasFor> {
  const joints = Object.entries(set.joints)
  const found: SchemasFor = { documents: {}, schemas: {}, hashes: {}, states: {}, problems: [] }
  for (const version of await versionsNamed(em, [...new Set(joints.map(([, j]) => j.firmware))])) {
    const name = firmwareName(version)
    const known = schemaOf(version)
    found.documents[name] = known.document
    found.schemas[name] = known.schema
    found.hashes[name] = known.hash
    found.states[name] = version.state
  }
  for (const [joint, { firmware }] of joints) {
    const problem = tellOf(firmware, found.states[firmware])
    if (problem) found.problems.push({ pointer: toPointer(['joints', joint, 'firmware']), joint, firmware, ...problem })
  }
  return found
}
