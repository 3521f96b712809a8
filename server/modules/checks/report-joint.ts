import type { EntityManager } from '@mikro-orm/core'
import type { JointReportView, JointSide, VertexRow } from '../../../shared/contract/checks.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import type { CurvesResult } from '../../jobs/analyses/curves.ts'
import type { NominalResult } from '../../jobs/analyses/nominal.ts'
import { request } from '../../jobs/analyses/requests.ts'
import { smallestShare, type ToleranceResult } from '../../jobs/analyses/tolerance.ts'
import { valuesOfPoints } from '../../jobs/analyses/tolerance-points.ts'
import type { Change } from '../changes/change.entity.ts'
import { assembleCheck, figuresOf, type KnownResults } from './assemble-check.ts'
import { hereIfQuick, lookAtCheck, worded } from './look-at-check.ts'
import type { PreparedCheck, PreparedJoint, Side } from './prepare-check.ts'

type Modelled = Side & { kind: 'model' }

/** A joint of the prepared check. @throws DomainError not-found */
export function jointOf(check: PreparedCheck, joint: string): PreparedJoint {
  const found = check.joints.find((j) => j.joint === joint)
  if (!found) throw new DomainError('not-found', `There is no joint "${joint}" in this change. Choose one of: ${check.joints.map((j) => j.joint).join(', ').slice(0, 600)}.`)
  return found
}

const sweepOf = (side: Modelled, known: KnownResults): ToleranceResult | null => {
  const outcome = side.asked.tolerance && known.get(side.asked.tolerance.hash)
  return outcome?.kind === 'result' ? (outcome.result as ToleranceResult) : null
}

function sideOf(side: Side | null, known: KnownResults, curves: KnownResults): JointSide | null {
  if (side?.kind !== 'model') return null
  const judged = figuresOf(side, known)
  if (judged.kind !== 'figures') return null
  const nominal = known.get(side.asked.nominal.hash)
  const drawn = curves.get(request('curves', { model: side.model }).hash)
  const { firmware, environment } = side.model
  return {
    figures: judged.figures,
    curves: drawn?.kind === 'result' ? (drawn.result as CurvesResult) : {},
    step: nominal?.kind === 'result' ? (nominal.result as NominalResult).traces : null,
    stepAtWorst: sweepOf(side, known)?.traces ?? null,
    clamps: { speed: firmware.omega_max < Number.MAX_VALUE ? firmware.omega_max : null, current: firmware.I_max, voltage: firmware.d_max * environment.V_bus },
  }
}

/** Every corner of the box, worst margin first; the base's margins beside those that stand at the same values. */
function rowsOf(now: Modelled, then: Side | null, known: KnownResults): VertexRow[] | null {
  const sweep = sweepOf(now, known)
  if (!sweep) return null
  const corners = (side: Modelled, s: ToleranceResult) => valuesOfPoints({ model: side.model, bounds: s.figures.bounds, vertexNames: s.figures.vertexNames }, 0, s.vertices.length)
  const before = then?.kind === 'model' ? sweepOf(then, known) : null
  const released = new Map(before && then?.kind === 'model' ? corners(then, before).map((values, k) => [JSON.stringify(values), before.vertices[k].loops]) : [])
  const values = corners(now, sweep)
  return sweep.vertices
    .map((v): VertexRow => ({ ...v, values: values[v.index], released: released.get(JSON.stringify(values[v.index])) ?? null }))
    .toSorted((a, b) => smallestShare(a.loops) - smallestShare(b.loops) || b.rho - a.rho || a.index - b.index)
}

/** Everything about one joint: curves, eigenvalues, time histories, corners; as it stands in the change and in the base. */
export async function reportJoint(services: Services, em: EntityManager, change: Change, joint: string, asker: number): Promise<JointReportView> {
  const look = await lookAtCheck(services, em, change, asker)
  const { check, known } = look
  const prepared = jointOf(check, joint)
  const { now } = prepared
  const then = prepared.touched ? prepared.then : now
  const models = [now, then].flatMap((s) => (s?.kind === 'model' ? [s.model] : []))
  const curves = await services.checks.settle(models.map((model) => request('curves', { model })), { asker, urgent: true, here: hereIfQuick() }).catch(worded)
  const alike = check.joints.filter((j) => j.now.kind === 'model' && now.kind === 'model' && j.now.asked === now.asked).map((j) => j.joint)
  return {
    joint,
    touched: prepared.touched,
    alike: alike.length === 0 ? [joint] : alike,
    candidate: sideOf(now, known, curves),
    released: sideOf(then, known, curves),
    vertices: now.kind === 'model' ? rowsOf(now, then, known) : null,
    findings: assembleCheck(check, known).findings.filter((f) => f.joints.includes(joint)),
    modelVersion: check.inputs.modelVersion,
    policyNumber: check.inputs.policyNumber,
    complete: look.complete,
    progress: look.progress,
  }
}
