import { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { placeOf, readText, withNumericAddresses, type TextProblem } from '../../../shared/parameters/set-text.ts'
import { DomainError } from '../../http/errors.ts'
import { problemsOf } from '../../http/validate.ts'
import { Recent } from '../../jobs/recent.ts'

export type ReadSet = { ok: true; set: MachineSet } | { ok: false; problems: TextProblem[] }

/** References that must lead somewhere, and bounds that must not cross; the schema cannot say these. */
function structureProblems(set: MachineSet): { pointer: string; detail: string }[] {
  const problems: { pointer: string; detail: string }[] = []
  for (const [key, joint] of Object.entries(set.joints)) {
    if (!Object.hasOwn(set.families, joint.family)) problems.push({ pointer: `/joints/${key}/family`, detail: `there is no family "${joint.family}"` })
    if (!Object.hasOwn(set.buses, joint.bus)) problems.push({ pointer: `/joints/${key}/bus`, detail: `there is no bus "${joint.bus}"` })
  }
  for (const [key, family] of Object.entries(set.families))
    for (const [letter, q] of Object.entries(family.driveTrain))
      if (typeof q === 'object' && !(q.low <= q.value && q.value <= q.high)) problems.push({ pointer: `/families/${key}/driveTrain/${letter}`, detail: `the bounds cross: ${q.low} to ${q.high} does not hold ${q.value}` })
  return problems
}

/** Reads the text of a change, or of a file, into a machine set; every problem at once, with its line. */
export function readSet(text: string): ReadSet {
  const read = readText(text)
  if (!read.ok) return { ok: false, problems: read.problems }
  const document = withNumericAddresses(read.document)
  const shape = problemsOf(MachineSet, document)
  const problems = shape.length > 0 ? shape : structureProblems(document as MachineSet)
  if (problems.length === 0) return { ok: true, set: document as MachineSet }
  const offsetOf = (pointer: string): number => read.pointerOffsets.get(pointer) ?? (pointer === '' ? 0 : offsetOf(pointer.slice(0, pointer.lastIndexOf('/'))))
  return { ok: false, problems: problems.map((p) => ({ ...placeOf(text, offsetOf(p.pointer)), pointer: p.pointer, message: p.detail })) }
}

/** Sets by their text: one draft is read many times over, and reading a whole machine takes longer than most of what is done with it. Nobody alters a set that was read. */
const known = new Recent<MachineSet>(40)

/** @throws DomainError content-invalid with line, column and pointer of each problem */
export function setOf(text: string): MachineSet {
  const before = known.get(text)
  if (before) return before
  const read = readSet(text)
  if (read.ok) {
    known.set(text, read.set)
    return read.set
  }
  throw new DomainError('content-invalid', `The text can't be read as a machine set: ${read.problems.length === 1 ? 'one place' : `${read.problems.length} places`} to correct. The last saved state stands; what you typed is still with you.`, {
    fields: read.problems.map((p) => ({ pointer: p.pointer, detail: `line ${p.line}, column ${p.column}: ${p.message}` })),
    extra: { problems: read.problems },
  })
}
