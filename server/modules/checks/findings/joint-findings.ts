import { brakingFindings } from './braking.ts'
import { currentFindings, pwmFindings } from './currents.ts'
import type { RawFinding } from './finding.ts'
import { guardFindings } from './guards.ts'
import type { JointContext } from './joint-context.ts'
import { marginFindings } from './margins.ts'
import { roundingFindings } from './rounding.ts'
import { sensitivityFindings } from './sensitivity.ts'
import { speedFindings } from './speed.ts'
import { stabilityFindings } from './stability.ts'
import { limitCycleFindings, stepFindings } from './step.ts'
import { deadTimeFindings, rippleFindings, samplingFindings, separationFindings, windowFindings } from './timing.ts'
import { peakTimeFindings, windingFindings } from './winding.ts'

/** Every subject that is judged of one joint; each says nothing where it has nothing to go by. */
const subjects: readonly ((c: JointContext) => RawFinding[])[] = [
  stabilityFindings, marginFindings, sensitivityFindings, separationFindings, samplingFindings, deadTimeFindings, windowFindings, rippleFindings, pwmFindings, currentFindings,
  windingFindings, peakTimeFindings, speedFindings, stepFindings, limitCycleFindings, brakingFindings, guardFindings, roundingFindings,
]

const overflows = ({ value, limit, text }: RawFinding) => [value, limit].some((v) => v !== null && !Number.isFinite(v)) || /\b(NaN|Infinity)\b/.test(text)

/** A figure that overflowed is none: the finding then says so, and stands in the way. */
const told = (f: RawFinding): RawFinding =>
  overflows(f)
    ? { ...f, level: 'block', value: null, limit: null, text: `The ${f.kind} could not be computed: values of the drive train lead beyond every number.`, remedy: 'Correct the values of the drive train; look at their units.' }
    : f

export const jointFindings = (c: JointContext): RawFinding[] => subjects.flatMap((subject) => subject(c)).map(told)
