import { createHash } from 'node:crypto'
import canonicalize from 'canonicalize'
import type { JointModel } from '../../control/model.ts'
import { MODEL_VERSION } from '../../control/model-version.ts'
import type { OneNode, TwoNode } from '../../control/simulation/winding-heat.ts'
import type { GainName } from '../../control/tuning/robust-retune.ts'
import type { LoopName, ToleranceBound } from '../../../shared/contract/checks.ts'

/** The step that a check commands, with what acts beside the joint. SI. */
export interface StepInputs {
  to: number
  /** whole gap at the output, rad; only where the drive train is compliant */
  backlash: number
  source_resistance: number
}

/** The winding and the currents it is asked to bear; time constants null where the motor gives none. */
export interface HeatInputs {
  node: OneNode | TwoNode
  hasTime: boolean
  T_max: number
  continuous: number | null
  peak: number | null
}

export interface NominalInputs {
  model: JointModel
  step: StepInputs
  heat: HeatInputs | null
}

export interface ToleranceInputs {
  model: JointModel
  step: StepInputs
  bounds: ToleranceBound[]
}

export interface CurvesInputs {
  model: JointModel
}

export interface AxisInputs {
  parameter: string
  low: number
  high: number
  count: number
}

export interface MapInputs {
  model: JointModel
  x: AxisInputs
  y: AxisInputs
}

/** One value varied between two bounds, SI, all else as the model has it. */
export interface StretchInputs {
  model: JointModel
  parameter: string
  low: number
  high: number
}

/** Gains that a retune may move, as factors of what stands, and what it must keep. */
export interface RetuneInputs {
  model: JointModel
  bounds: ToleranceBound[]
  gains: Partial<Record<GainName, readonly [number, number]>>
  bandwidthHz: Partial<Record<LoopName, number>>
  peakCurrent: { limit: number; step: StepInputs } | null
  tries: number
}

/** An analysis: a pure function of its inputs, so that its hash names its result for ever. */
export type AnalysisRequest =
  | { kind: 'nominal'; hash: string; inputs: NominalInputs }
  | { kind: 'tolerance'; hash: string; inputs: ToleranceInputs }
  | { kind: 'curves'; hash: string; inputs: CurvesInputs }
  | { kind: 'map'; hash: string; inputs: MapInputs }
  | { kind: 'stretches'; hash: string; inputs: StretchInputs }
  | { kind: 'retune'; hash: string; inputs: RetuneInputs }

export type AnalysisKind = AnalysisRequest['kind']
type InputsOf<K extends AnalysisKind> = Extract<AnalysisRequest, { kind: K }>['inputs']

/** SHA-256 of the RFC 8785 form of kind, model version and inputs. */
export const request = <K extends AnalysisKind>(kind: K, inputs: InputsOf<K>): Extract<AnalysisRequest, { kind: K }> =>
  ({ kind, inputs, hash: createHash('sha256').update(canonicalize({ kind, modelVersion: MODEL_VERSION, inputs })!).digest('hex') }) as unknown as Extract<AnalysisRequest, { kind: K }>
