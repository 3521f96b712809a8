import type { EntityManager } from '@mikro-orm/core'
import type { ComparisonView, IdentificationView, LogWindow } from '../../../shared/contract/evidence.ts'
import { placeIn } from '../../db/file-store.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import type { IdentificationReport } from '../../control/identification/identify.ts'
import type { ResidualSeries } from '../../control/identification/signals.ts'
import type { FileAt } from '../../jobs/logs/columns-file.ts'
import type { Task, TaskResult } from '../../jobs/task.ts'
import { stateOf, type Evidence } from './evidence.entity.ts'
import { againstOf, driveTrainOf, modelOf } from './model-of.ts'
import { identifiedValues, knownOf } from './to-drive-train.ts'

/** The columns as stored. @throws DomainError wrong-state before they are read */
function columnsAt(services: Services, evidence: Evidence): FileAt {
  if (stateOf(evidence) !== 'read') throw new DomainError('wrong-state', evidence.removedAt ? `${evidence.name} was removed; nothing is computed from it.` : `The columns of ${evidence.name} are not read yet. Say which is which first.`)
  return { path: placeIn(services.files.directory, evidence.columnsSha256!), sha256: evidence.columnsSha256! }
}

/** A task on a thread. @throws DomainError content-invalid in the words of the numerics; unexpected when the thread ended */
async function computed<T extends Task>(services: Services, task: T): Promise<TaskResult<T>> {
  const outcome = await services.checks.aside(task).catch((error: Error) => {
    throw new DomainError('unexpected', `It could not be computed: ${error.message}. Nothing was altered; try again, and tell your administrator if it fails again.`)
  })
  if (outcome.kind === 'refused') throw new DomainError('content-invalid', outcome.text, { fields: [{ pointer: '', detail: outcome.text }] })
  return outcome.result
}

const mostPieces = 2000

/** A stretch of the log to draw; the whole of it where no end is given. */
export const drawLog = (services: Services, evidence: Evidence, { from, to, pieces }: { from: number | null; to: number | null; pieces: number }): Promise<LogWindow> =>
  computed(services, { kind: 'draw log', inputs: { file: columnsAt(services, evidence), from, to, pieces: Math.max(50, Math.min(mostPieces, pieces)) } })

/** Measured beside predicted. */
export async function compare(services: Services, em: EntityManager, evidence: Evidence, { change, from }: { change?: string; from: number | null }): Promise<ComparisonView> {
  const file = columnsAt(services, evidence)
  const against = await againstOf(em, evidence, change)
  const inputs = await modelOf(em, evidence, against)
  return { ...(await computed(services, { kind: 'compare log', inputs: { file, from, ...inputs } })), modelOf: against.words }
}

const drawn = (residual: ResidualSeries | null) => ({
  residual: residual && { x: [...residual.time], y: [...residual.value] },
  rms: residual?.rms ?? 0,
  neighbourCorrelation: residual?.neighbourCorrelation ?? 0,
})

/** What the log says of the drive train, beside what the set says of it. */
export async function identifyFrom(services: Services, em: EntityManager, evidence: Evidence, { change, T_winding }: { change?: string; T_winding: number }): Promise<IdentificationView> {
  const file = columnsAt(services, evidence)
  const against = await againstOf(em, evidence, change)
  const { family, driveTrain } = driveTrainOf(evidence, against)
  const known = knownOf(driveTrain, T_winding)
  let report: IdentificationReport = await computed(services, { kind: 'identify', inputs: { file, known } })
  // A log that does not show k_e still shows J, b and friction by the torque constant that stands.
  if (report.torqueConstant === null) {
    const { model } = await modelOf(em, evidence, against)
    report = await computed(services, { kind: 'identify', inputs: { file, known: { ...known, k_t: model.plant.k_t } } })
  }
  return {
    values: identifiedValues(report, family, driveTrain),
    torqueConstant: report.torqueConstant,
    known: { N: known.N, eta: known.eta, R_on: known.R_on, T_winding },
    electrical: { ...drawn(report.electrical.residual), unit: report.electrical.residualUnit },
    mechanical: { ...drawn(report.mechanical.residual), unit: report.mechanical.residualUnit },
    rows: report.rows,
    rate: report.rate,
    repairs: report.repairs,
    modelOf: against.words,
  }
}
