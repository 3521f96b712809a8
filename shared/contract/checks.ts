import { Type, type Static } from '@sinclair/typebox'
import { loopNames, type LoopName } from './loop-names.ts'

const strict = { additionalProperties: false }

/** Levels of a finding, mildest first. */
export const findingLevels = ['pass', 'advise', 'concession needed', 'block'] as const
export type FindingLevel = (typeof findingLevels)[number]

export { loopNames, type LoopName }

export interface Finding {
  /** stable within a check: kind, loop, joints; a concession names it */
  key: string
  /** what is judged, such as "phase margin"; one name everywhere */
  kind: string
  level: FindingLevel
  /** keys of the joints it holds for; empty when it is about a bus or the machine */
  joints: string[]
  loop?: LoopName
  /** what was computed, in `unit`; null where the finding is not a figure */
  value: number | null
  limit: number | null
  unit: string
  /** one sentence: what was found */
  text: string
  /** one sentence: the consequence and the remedy; empty for a pass */
  remedy: string
  /** where the limit comes from */
  source: string
  /** RFC 6901 pointer into the machine set, where one place is to blame */
  pointer?: string
}

export type Verdict = 'stable' | 'unstable' | 'on the boundary'

export interface LoopFigures {
  verdict: Verdict
  gainMarginDb: number | null
  /** words when gainMarginDb is null: "above 60 dB", "unstable" */
  gainMarginReads: string
  /** null: none down to −60 dB, or unstable */
  gainMarginDownDb: number | null
  phaseMarginDeg: number | null
  /** words when phaseMarginDeg is null: "none up to 180°", "unstable" */
  phaseMarginReads: string
  delayMarginS: number | null
  sensitivityPeak: number | null
  bandwidthHz: number | null
  /** where the margins are read off, for marks on the curves; null where there is no margin */
  phaseMarginHz: number | null
  gainMarginHz: number | null
}

/** Figures of one simulated step, friction, quantisation and clamps kept. SI; shares in percent. */
export interface StepFigures {
  /** the signal that the closed mode commands */
  response: LoopName
  /** commanded step: rad, rad/s or A */
  stepTo: number
  windowS: number
  /** 10 to 90 %; null: 90 % is not reached */
  riseTimeS: number | null
  overshootPercent: number
  /** 2 %; null: does not settle inside the window */
  settlingTimeS: number | null
  /** reference minus the mean over the last fifth, in the signal's unit */
  finalError: number
  peakCurrentA: number
  rmsCurrentA: number
  peakVoltageRequestV: number
  peakSpeed: number
  /** peak to peak over the last fifth, of the commanded signal in its unit */
  rippleOfResponse: number
  rippleOfPosition: number
  rippleOfCurrentA: number
}

/** Winding heat; absent data leave null, with the words why. */
export interface HeatFigures {
  nodes: 1 | 2
  ambientCelsius: number
  limitCelsius: number
  /** largest current whose steady temperature is the limit, A */
  continuousCurrentA: number
  /** the registers' continuous limit and where the winding settles at it; null with words: "no continuous limit", "no steady temperature" */
  continuousA: number | null
  steadyCelsius: number | null
  steadyReads: string
  /** the registers' peak limit and how long it lasts from ambient; null with words: "never reaches the limit" */
  peakA: number | null
  timeAtPeakS: number | null
  timeAtPeakReads: string
}

export interface PointCount {
  points: number
  stable: number
  boundary: number
  unstable: number
}

/** A point of the tolerance box: a vertex by its index, or a sample inside. Values by letter, SI. */
export interface Corner {
  kind: 'vertex' | 'sample'
  index: number
  values: Record<string, number>
}

export interface WorstFigure {
  value: number
  at: Corner
}

export interface ToleranceBound {
  /** letter of the drive train: R, L, k_t (k_e moves with it), J_load, T_winding, V_bus, eta … */
  name: string
  unit: string
  nominal: number
  low: number
  high: number
}

/** The tolerance box of one joint, swept. */
export interface ToleranceFigures {
  bounds: ToleranceBound[]
  /** letters whose low and high make the vertices; all of the bounds up to ten of them */
  vertexNames: string[]
  vertices: PointCount
  samples: PointCount
  /** samples at which margins were computed too; stability is computed at all of them */
  samplesWithMargins: number
  worstRho: WorstFigure
  loops: Partial<Record<LoopName, { phaseMarginDeg: WorstFigure | null; gainMarginDb: WorstFigure | null; unstable: number }>>
  /** vertex whose smallest margin is the smallest, margins in shares of 45° and 8 dB */
  worstVertex: Corner
  /** the step at that vertex; null when the loop is not stable there */
  stepAtWorst: StepFigures | null
  /** largest simulated current over the vertices that were run through the step */
  peakCurrentA: WorstFigure | null
  stepsRun: number
}

export interface JointFigures {
  verdict: Verdict
  rho: number
  hyperperiodS: number
  decayRate: number
  /** null when the loop does not decay */
  slowestTimeConstantS: number | null
  /** frequencies are known modulo 1/hyperperiodS */
  eigenvalues: { re: number; im: number; decayRate: number; frequencyHz: number }[]
  loops: Partial<Record<LoopName, LoopFigures>>
  /** null when the loop is not stable */
  step: StepFigures | null
  /** null where the drive train lacks thermal data */
  heat: HeatFigures | null
  /** null until the sweep is done */
  tolerance: ToleranceFigures | null
}

/** The check of one joint: figures as it stands in the change and, where it stands there too, in the base release. */
export interface JointCheck {
  joint: string
  touched: boolean
  candidate: JointFigures | null
  released: JointFigures | null
  imageSha256: string | null
}

export interface CheckResult {
  inputsHash: string
  modelVersion: string
  policyNumber: number
  joints: JointCheck[]
  findings: Finding[]
  counts: Record<FindingLevel, number>
  verdict: Verdict | null
}

/** `stopped` and `failed` keep what was done; asking again goes on from there. */
export interface Progress {
  done: number
  total: number
  state: 'running' | 'done' | 'stopped' | 'failed'
  /** what failed and what to do; empty otherwise */
  problem: string
}

/** GET /changes/:change/check: the nominal findings at once; the whole once `complete`. */
export interface CheckView extends CheckResult {
  checkedAt: string
  /** false while findings over the tolerances are still to come */
  complete: boolean
  progress: Progress
}

/** POST /changes/:change/check/stop answers the progress as it then stands. A stopped sweep starts again with POST /changes/:change/check/resume. */
export interface StoppedView {
  progress: Progress
}

/** GET /changes/:change/check/events, `text/event-stream`: each message's data is one of these as JSON. After `done` the matching GET or POST answers the whole. */
export type CheckEvent = { kind: 'check'; progress: Progress; /** sweeps that are done: more of them, more findings */ finished: number } | { kind: 'map' | 'retune'; hash: string; progress: Progress }

/** Bode curve of a loop: L broken, T closed. Phases unwrapped, degrees. */
export interface LoopCurve {
  hz: number[]
  openDb: number[]
  openPhaseDeg: number[]
  closedDb: number[]
  closedPhaseDeg: number[]
}

/** Decimated time histories, at most 400 samples, SI. */
export interface StepTraces {
  t: number[]
  reference: number[]
  theta: number[]
  omega: number[]
  i: number[]
  u: number[]
}

export interface VertexLoop {
  verdict: Verdict
  /** null with the loop's verdict unstable, or none within the search's limits */
  phaseMarginDeg: number | null
  gainMarginDb: number | null
}

export interface VertexRow {
  index: number
  values: Record<string, number>
  rho: number
  verdict: Verdict
  loops: Partial<Record<LoopName, VertexLoop>>
  /** the base release at the same corner; null where it has none with these values */
  released: Partial<Record<LoopName, VertexLoop>> | null
}

/** One side of a joint's report. */
export interface JointSide {
  figures: JointFigures
  curves: Partial<Record<LoopName, LoopCurve>>
  step: StepTraces | null
  /** the step at the worst vertex; null until the sweep is done */
  stepAtWorst: StepTraces | null
  /** what the firmware clamps to: rad/s, A, V */
  clamps: { speed: number | null; current: number; voltage: number }
}

/** GET /changes/:change/check/joints/:joint */
export interface JointReportView {
  joint: string
  touched: boolean
  /** joints whose figures are these too, itself among them */
  alike: string[]
  candidate: JointSide | null
  released: JointSide | null
  /** sorted by the worst margin (shares of 45° and 8 dB), worst first; null until the sweep is done */
  vertices: VertexRow[] | null
  findings: Finding[]
  modelVersion: string
  policyNumber: number
  complete: boolean
  progress: Progress
}

/** Values that a map's axis may vary: gains and timing of the firmware and letters of the drive train, SI. */
export const mapParameters = [
  'K_pp', 'K_ip', 'K_pv', 'K_iv', 'K_pc', 'K_ic', 'W', 'D', 'f_c', 'f_o',
  'R', 'R_on', 'L', 'k_t', 'k_e', 'N', 'eta', 'J_rotor', 'J_load', 'b_rotor', 'b_load', 'k_s', 'd_s', 'V_bus', 'T_winding',
] as const
export type MapParameter = (typeof mapParameters)[number]

/** Most cells along one axis of a map. */
export const mapCellsPerAxis = 64

const Axis = Type.Object(
  {
    parameter: Type.Union(mapParameters.map((p) => Type.Literal(p))),
    low: Type.Number(),
    high: Type.Number(),
    count: Type.Integer({ minimum: 2, maximum: mapCellsPerAxis }),
  },
  strict,
)
/** A joint's key in a request. */
export const JointKey = Type.String({ minLength: 1, maxLength: 40 })

/** POST /changes/:change/check/map: the same request again answers the map as far as it is. */
export const AskMap = Type.Object({ joint: JointKey, x: Axis, y: Axis }, strict)
export type AskMap = Static<typeof AskMap>

export interface MapAxisView {
  parameter: MapParameter
  unit: string
  /** equal ratios where the bounds lie more than a factor of 20 apart, else equal steps */
  values: number[]
  spacing: 'equal steps' | 'equal ratios'
  /** pointer to the value that a clicked cell edits, and its factor from SI to the parameter's unit; null for what no register holds */
  pointer: string | null
  perSi: number | null
}

/** Rows of constant y from the first to the last, each along x: x.values.length × y.values.length cells. */
export interface MapCells {
  verdicts: Verdict[]
  rho: number[]
  /** smallest over the loops; null where the cell is not stable or no loop has a margin */
  phaseMarginDeg: (number | null)[]
  gainMarginDb: (number | null)[]
}

export interface MapView {
  hash: string
  joint: string
  x: MapAxisView
  y: MapAxisView
  progress: Progress
  /** null until done */
  cells: MapCells | null
  candidate: { x: number; y: number }
  /** null where the joint does not stand in the base */
  released: { x: number; y: number } | null
}

const Pointer = Type.String({ pattern: '^(?:/(?:[^~/]|~0|~1)*)+$', maxLength: 400 })

/** POST /changes/:change/check/quick: one joint with edits that are not saved yet. Nothing of it is kept. */
export const AskQuick = Type.Object(
  { joint: JointKey, edits: Type.Array(Type.Object({ pointer: Pointer, from: Type.Optional(Type.Unknown()), to: Type.Optional(Type.Unknown()) }, strict), { maxItems: 5000 }) },
  strict,
)
export type AskQuick = Static<typeof AskQuick>

/** The joint's nominal figures, and the findings that are about it alone; tolerances, buses and other joints wait for the save. */
export interface QuickView {
  joint: JointCheck
  findings: Finding[]
}

/** POST /changes/:change/check/stretches: where on each ruler the joint would not be stable, all else as it stands. Bounds in the parameter's own unit. */
export const AskStretches = Type.Object(
  { joint: JointKey, rulers: Type.Array(Type.Object({ parameter: Type.String({ minLength: 1, maxLength: 64 }), low: Type.Number(), high: Type.Number() }, strict), { minItems: 1, maxItems: 16 }) },
  strict,
)
export type AskStretches = Static<typeof AskStretches>

export interface Stretch {
  from: number
  to: number
}

export interface StretchesView {
  joint: string
  /** one for each ruler whose parameter the model varies; in the parameter's unit, ascending */
  rulers: { parameter: string; unstable: Stretch[] }[]
}
