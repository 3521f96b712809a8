import { Type, type Static } from '@sinclair/typebox'
import type { Edit } from '../parameters/edits.ts'
import { dimensionText, sameDimension } from '../units/dimension.ts'
import { parseUnit } from '../units/unit.ts'
import type { Allowed } from './people.ts'

const strict = { additionalProperties: false }

/** Most bytes of one bench log. */
export const logLimit = 200_000_000

/** What a column of a bench log may hold. Output-referred, but for the electrical ones. */
export const logSignals = ['time', 'set-point', 'position', 'speed', 'current', 'voltage', 'duty'] as const
export type LogSignal = (typeof logSignals)[number]

/** The units that each signal may be in, by one of their dimension; a set-point is in the unit of the mode that was closed. */
const measuredIn: Record<LogSignal, readonly string[]> = { time: ['s'], 'set-point': ['rad', 'rad/s', 'A'], position: ['rad'], speed: ['rad/s'], current: ['A'], voltage: ['V'], duty: ['1'] }

/** What is wrong with a unit for a signal; null when it fits. */
export function unitProblem(signal: LogSignal, unit: string): string | null {
  const read = parseUnit(unit.trim())
  if (!read) return unit.trim() === '' ? 'has no unit' : `“${unit}” is no unit that Detent knows`
  const fits = measuredIn[signal].some((u) => sameDimension(parseUnit(u)!.dimension, read.dimension))
  return fits ? null : `${unit} is ${dimensionText(read.dimension)}; ${signal} is in ${measuredIn[signal].join(', ').replace(/, ([^,]*)$/, ' or $1')}`
}

const Signal = Type.Union(logSignals.map((s) => Type.Literal(s)))
export const ColumnMapping = Type.Object({ signal: Signal, column: Type.Integer({ minimum: 0, maximum: 255 }), unit: Type.String({ minLength: 1, maxLength: 20 }) }, strict)
export type ColumnMapping = { signal: LogSignal; column: number; unit: string }

export const ReadLog = Type.Object({ mapping: Type.Array(ColumnMapping, { minItems: 2, maxItems: logSignals.length }) }, strict)
export type ReadLog = Static<typeof ReadLog>

/** How a log's text is laid out, as found in its first lines. */
export interface LogLayout {
  delimiter: ',' | ';' | '\t' | '|'
  decimal: '.' | ','
  /** lines before the first row of numbers */
  skipped: number
  columns: { name: string; unit: string; samples: string[] }[]
  /** what was noted on the way, one sentence each */
  notes: string[]
}

/** What was read from a log. */
export interface LogReading {
  rows: number
  /** s */
  from: number
  to: number
  /** Hz, from the median spacing */
  rate: number
  /** in the file's own unit: what the numbers were multiplied by is in the mapping */
  signals: LogSignal[]
  /** unbroken runs of rows */
  stretches: number
  /** what was left out, found or put right, one sentence each */
  repairs: string[]
}

export interface LogProgress {
  state: 'running' | 'stopped' | 'failed' | 'idle'
  /** bytes of text read, and to read */
  done: number
  total: number
  /** why it stopped or failed; empty otherwise */
  problem: string
  /** pointers into the mapping, where the fault lies there */
  errors: { pointer: string; detail: string }[]
}

export interface EvidenceSummary {
  number: number
  machine: string
  joint: string
  jointName: string
  change: string | null
  name: string
  sha256: string
  bytes: number
  uploadedBy: string
  uploadedAt: string
  state: 'received' | 'read' | 'removed'
  /** once read */
  reading: LogReading | null
}

export interface EvidenceView extends EvidenceSummary {
  machineName: string
  storedBytes: number
  storedSha256: string
  layout: LogLayout
  /** as chosen; before that as proposed from what was chosen for the machine's last log with such columns, or from the names */
  mapping: ColumnMapping[]
  /** the log whose columns it was taken over from; null when it was guessed from the names */
  mappingFrom: number | null
  progress: LogProgress
  readAt: string | null
  removedAt: string | null
  removedBy: string | null
  may: { read: Allowed; remove: Allowed; use: Allowed }
}

/** A series decimated so that the least and the greatest of every piece stay. SI. */
export interface DrawnSeries {
  x: number[]
  /** null: a gap in the log */
  y: (number | null)[]
}

export interface LogWindow {
  /** s */
  from: number
  to: number
  rows: number
  /** rows behind each pair of points drawn; 1: every row is drawn */
  rowsPerPoint: number
  series: { signal: LogSignal; unit: string; drawn: DrawnSeries }[]
}

export interface ComparisonView {
  from: number
  to: number
  rows: number
  setPoint: { unit: string; drawn: DrawnSeries }
  signals: { signal: LogSignal; unit: string; measured: DrawnSeries; predicted: DrawnSeries; rmsError: number; normalisedRmsError: number | null }[]
  /** of whom the prediction is: "release 1.4.0" or "change dunlin-47" */
  modelOf: string
  repairs: string[]
}

/** Letters of a drive train that a log can give. */
export const identifiedLetters = ['R', 'k_e', 'L', 'J', 'b', 'tau_c'] as const
export type IdentifiedLetter = (typeof identifiedLetters)[number]

export interface IdentifiedValue {
  letter: IdentifiedLetter
  unit: string
  /** null where the run does not show it */
  value: number | null
  standardError: number | null
  /** why there is none, and which run would give it */
  reason: string
  remedy: string
  /** what the drive train says of the same; null where it says nothing */
  modelled: number | null
  /** what it becomes in the drive train; null where it cannot be used, for `unusable` */
  edit: Edit | null
  editWords: string
  unusable: string
}

export interface IdentificationView {
  values: IdentifiedValue[]
  torqueConstant: 'given' | 'taken equal to k_e' | null
  known: { N: number; eta: number; R_on: number; T_winding: number }
  electrical: { residual: DrawnSeries | null; unit: 'A' | 'V'; rms: number; neighbourCorrelation: number }
  mechanical: { residual: DrawnSeries | null; unit: 'rad' | 'rad/s'; rms: number; neighbourCorrelation: number }
  rows: number
  rate: number
  repairs: string[]
  modelOf: string
}

export const UseIdentified = Type.Object(
  {
    /** a draft of one's own to write in; a new change when absent */
    change: Type.Optional(Type.String({ maxLength: 60 })),
    title: Type.Optional(Type.String({ minLength: 1, maxLength: 120, pattern: '\\S' })),
    letters: Type.Array(Type.Union(identifiedLetters.map((l) => Type.Literal(l))), { minItems: 1, maxItems: identifiedLetters.length, uniqueItems: true }),
    T_winding: Type.Number({ minimum: -60, maximum: 250 }),
  },
  strict,
)
export type UseIdentified = { change?: string; title?: string; letters: IdentifiedLetter[]; T_winding: number }
