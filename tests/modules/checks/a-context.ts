import type { JointFigures, LoopFigures, StepFigures, ToleranceFigures } from '../../../shared/contract/checks.ts'
import { defaultPolicy } from '../../../shared/contract/policy.ts'
import type { DriveTrain } from '../../../shared/parameters/machine-set.ts'
import type { Role } from '../../../shared/registers/roles.ts'
import type { JointModel } from '../../../server/control/model.ts'
import type { RawFinding } from '../../../server/modules/checks/findings/finding.ts'
import { jointFindings } from '../../../server/modules/checks/findings/joint-findings.ts'
import type { JointContext } from '../../../server/modules/checks/findings/joint-context.ts'
import { environmentOf, plantOf } from '../../../server/modules/checks/joint-model.ts'
import { aDriveTrain } from '../../support/a-set.ts'

export const aLoop = (edit: Partial<LoopFigures> = {}): LoopFigures => ({
  verdict: 'stable', gainMarginDb: 12, gainMarginReads: '', gainMarginDownDb: null, phaseMarginDeg: 60, phaseMarginReads: '', delayMarginS: 0.01, sensitivityPeak: 1.4, bandwidthHz: 50, phaseMarginHz: 30, gainMarginHz: 150, ...edit,
})

export const aStep = (edit: Partial<StepFigures> = {}): StepFigures => ({
  response: 'position', stepTo: 0.2, windowS: 1, riseTimeS: 0.06, overshootPercent: 2, settlingTimeS: 0.15, finalError: 0, peakCurrentA: 1, rmsCurrentA: 0.4, peakVoltageRequestV: 6, peakSpeed: 3,
  rippleOfResponse: 0, rippleOfPosition: 0, rippleOfCurrentA: 0.01, ...edit,
})

const corner = (index: number) => ({ kind: 'vertex' as const, index, values: { k_t: 0.0128, eta: 0.75 } })

export const aSweep = (edit: Partial<ToleranceFigures> = {}): ToleranceFigures => ({
  bounds: [{ name: 'k_t', unit: 'N·m/A', nominal: 0.012, low: 0.0112, high: 0.0128 }, { name: 'eta', unit: '', nominal: 0.75, low: 0.75, high: 1.5 }],
  vertexNames: ['k_t', 'eta'],
  vertices: { points: 4, stable: 4, boundary: 0, unstable: 0 },
  samples: { points: 256, stable: 256, boundary: 0, unstable: 0 },
  samplesWithMargins: 64,
  worstRho: { value: 0.99, at: corner(1) },
  loops: {
    current: { phaseMarginDeg: { value: 55, at: corner(1) }, gainMarginDb: { value: 10, at: corner(1) }, unstable: 0 },
    velocity: { phaseMarginDeg: { value: 50, at: corner(1) }, gainMarginDb: { value: 9, at: corner(1) }, unstable: 0 },
    position: { phaseMarginDeg: { value: 70, at: corner(1) }, gainMarginDb: { value: 15, at: corner(1) }, unstable: 0 },
  },
  worstVertex: corner(1),
  stepAtWorst: aStep(),
  peakCurrentA: { value: 1.1, at: corner(1) },
  stepsRun: 2,
  ...edit,
})

export const someFigures = (edit: Partial<JointFigures> = {}): JointFigures => ({
  verdict: 'stable', rho: 0.99, hyperperiodS: 5e-4, decayRate: 20, slowestTimeConstantS: 0.05, eigenvalues: [],
  loops: { current: aLoop({ bandwidthHz: 800, phaseMarginHz: 500 }), velocity: aLoop(), position: aLoop({ bandwidthHz: 8 }) },
  step: aStep(), heat: null, tolerance: null, ...edit,
})

const firmware: JointModel['firmware'] = {
  mode: 'position', f_c: 16000, f_o: 2000, W: 10, D: 1, sensor_delay: 0, outer_delay: 0, K_pp: 30, K_ip: 0, K_pv: 1, K_iv: 10, K_pc: 2, K_ic: 4000, omega_max: 4, I_max: 1.8, d_max: 0.95, supply_compensated: true,
}

export interface Situation {
  driveTrain?: Partial<DriveTrain>
  firmware?: Partial<JointModel['firmware']>
  roles?: Partial<Record<Role, number | boolean | string | null>>
  figures?: Partial<JointFigures> | null
  loops?: JointFigures['loops']
  policy?: Partial<JointContext['policy']>
  recorded?: JointContext['recorded']
  board?: string | null
  rows?: JointContext['encoded']['rows']
  schema?: JointContext['schema']
}

/** A joint of which everything is within policy, altered where a test wants to look. */
export function aContext(s: Situation = {}): JointContext {
  const driveTrain = aDriveTrain(s.driveTrain)
  const roles: Situation['roles'] = { 'current.limit': 1.8, 'speed.limit': 4, 'bus.watchdog': 0.25, ...s.roles }
  const figures = s.figures === null ? null : someFigures({ ...s.figures, ...(s.loops ? { loops: { ...someFigures().loops, ...s.loops } } : {}) })
  return {
    family: 'knee', joint: 'knee-port', driveTrain, policy: { ...defaultPolicy, ...s.policy }, figures,
    schema: s.schema ?? ({ byName: new Map(), byRole: new Map() } as unknown as JointContext['schema']),
    encoded: { rows: s.rows ?? [] } as unknown as JointContext['encoded'],
    role: (role) => roles[role] ?? null,
    model: figures === null ? null : { plant: plantOf(driveTrain), firmware: { ...firmware, ...s.firmware }, environment: environmentOf(driveTrain) },
    recorded: s.recorded ?? null,
    board: s.board ?? null,
    pointerTo: (role) => `/values/${role}`,
  }
}

/** The findings of a kind, and of a loop where it has one. */
export const findingsAbout = (kind: string, s: Situation = {}, loop?: string): RawFinding[] => jointFindings(aContext(s)).filter((f) => f.kind === kind && (loop === undefined || f.loop === loop))
export const levelOf = (kind: string, s: Situation = {}, loop?: string): string => findingsAbout(kind, s, loop).map((f) => f.level).join(' ') || 'no finding'
