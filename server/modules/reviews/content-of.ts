import type { EntityManager } from '@mikro-orm/core'
import canonicalize from 'canonicalize'
import type { CheckResult } from '../../../shared/contract/checks.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import type { Change } from '../changes/change.entity.ts'
import { setOf } from '../changes/read-set.ts'
import { packCheck } from '../checks/pack-check.ts'
import { resolveJoint, sha256, type ResolvedJoint } from '../checks/resolve-joint.ts'
import { evidenceOf } from '../evidence/evidence-of.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { DomainError, type FieldProblem } from '../../http/errors.ts'

/** Numbers of a check as the content carries them: six significant digits, so that the last bits of another processor don't matter. */
const sixDigits = (value: unknown): unknown => {
  if (typeof value === 'number') return Number(value.toPrecision(6))
  if (Array.isArray(value)) return value.map(sixDigits)
  if (typeof value === 'object' && value !== null) return Object.fromEntries(Object.entries(value).map(([k, v]) => [k, sixDigits(v)]))
  return value
}

export interface Content {
  set: MachineSet
  joints: Map<string, ResolvedJoint & { kind: 'resolved' }>
  schemas: ReadonlyMap<string, ParameterSchema>
  /** by firmware name */
  schemaHashes: Record<string, string>
  schemaDocuments: Record<string, unknown>
  /** RFC 8785 form of what the signatures bind to */
  text: string
  hash: string
}

/**
 * The content of a change: what its signatures bind to.
 *
 * SHA-256 over the RFC 8785 form of: base release; for every joint its family, bus, address, schema hash, values with origin, drive train,
 * board binding and image hash; the buses; model and policy versions; the check (hash of its inputs, findings, figures to six digits); the
 * concessions; the reason; the hashes of the evidence.
 *
 * @throws DomainError content-invalid when a joint can't be encoded
 */
export async function contentOf(em: EntityManager, change: Change, check: CheckResult): Promise<Content> {
  const set = setOf(change.text)
  const loaded = await schemasFor(em, set)
  const schemas = new Map(Object.entries(loaded.schemas))
  const joints = new Map<string, ResolvedJoint & { kind: 'resolved' }>()
  const problems: FieldProblem[] = loaded.problems.filter((p) => p.kind === 'unknown').map((p) => ({ pointer: p.pointer, detail: p.text }))
  for (const joint of Object.keys(set.joints)) {
    const resolved = resolveJoint(set, joint, schemas, 0)
    if (resolved.kind === 'resolved') joints.set(joint, resolved)
    else problems.push(...resolved.problems)
  }
  if (problems.length > 0) throw new DomainError('content-invalid', `The values of ${change.machine.name} do not fit their firmware schemas. The draft is kept as it is; correct the values named.`, { fields: problems })
  const packed = packCheck(check)
  const content = {
    format: 'detent-content/1',
    machine: change.machine.key,
    base: change.baseRelease ? { version: change.baseRelease.version, sequence: change.baseRelease.sequence, contentHash: change.baseRelease.contentHash } : null,
    joints: Object.fromEntries(
      [...joints].map(([key, r]) => {
        const j = set.joints[key]
        return [key, { name: j.name, family: j.family, bus: j.bus, address: j.address, firmware: j.firmware, schemaHash: loaded.hashes[j.firmware], values: r.values, driveTrain: set.families[j.family].driveTrain, board: j.board ?? null, imageSha256: r.imageSha256 }]
      }),
    ),
    families: set.families,
    buses: set.buses,
    modelVersion: check.modelVersion,
    policyNumber: check.policyNumber,
    check: { inputsHash: packed.inputsHash, findings: sixDigits(packed.findings), joints: packed.joints, figures: sixDigits(packed.figures) },
    concessions: change.concessions,
    reason: change.reason,
    evidence: await evidenceOf(em, change),
  }
  const text = canonicalize(content)!
  return { set, joints, schemas, schemaHashes: loaded.hashes, schemaDocuments: loaded.documents, text, hash: sha256(text) }
}
