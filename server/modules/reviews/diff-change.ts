import type { EntityManager } from '@mikro-orm/core'
import canonicalize from 'canonicalize'
import type { DiffGroup, DiffRow, DiffView, Marked } from '../../../shared/contract/reviews.ts'
import { emptySet, type MachineSet } from '../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import { printSet } from '../../../shared/parameters/set-text.ts'
import { Recent } from '../../jobs/recent.ts'
import type { Change } from '../changes/change.entity.ts'
import { setOf } from '../changes/read-set.ts'
import { pointerOf, sha256 } from '../checks/resolve-joint.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { fieldRows } from './field-rows.ts'
import { foldGroups, type FoldedGroup, type JointRows } from './fold-groups.ts'
import { jointRows, settingNames, type Compared } from './joint-rows.ts'
import { marked, type Plain } from './marked.ts'

type Sets = Pick<Compared, 'before' | 'after'>

const union = <T>(a: Record<string, T>, b: Record<string, T>) => [...new Set([...Object.keys(a), ...Object.keys(b)])]

/** Where a joint's row stands in the set: its own value, else its family's. */
function placeOf({ before, after }: Sets, joint: string, { parameter, after: now }: Plain<DiffRow>): string {
  if ((settingNames as readonly string[]).includes(parameter)) return toPointer(['joints', joint, parameter])
  const set = now === null && Object.hasOwn(before.joints, joint) ? before : after
  const place = pointerOf(set, joint, parameter)
  return place === toPointer(['joints', joint]) ? toPointer(['families', set.joints[joint].family, 'values', parameter]) : place
}

function markGroup(sets: Sets, { family, joints, rows, own }: FoldedGroup): DiffGroup {
  const mark = (joint: string, row: Plain<DiffRow>, of: unknown): DiffRow => marked(row, { key: `value:${joint}:${row.parameter}`, pointer: placeOf(sets, joint, row), of })
  return { family, joints, rows: rows.map((r) => mark(joints[0], r, { family, joints })), own: own.map((o) => ({ joint: o.joint, rows: o.rows.map((r) => mark(o.joint, r, { family, joint: o.joint })) })) }
}

/** Joints that come and go, each in a row: what goes has no other. */
const comings = ({ before, after }: Sets): DiffView['joints'] => {
  const row = (joint: string, is: 'added' | 'removed', set: MachineSet) => marked({ joint, is }, { key: `joint:${joint}`, pointer: toPointer(['joints', joint]), of: set.joints[joint] })
  return [
    ...Object.keys(after.joints).filter((j) => !Object.hasOwn(before.joints, j)).map((j) => row(j, 'added', after)),
    ...Object.keys(before.joints).filter((j) => !Object.hasOwn(after.joints, j)).map((j) => row(j, 'removed', before)),
  ]
}

/** A family's name, and values it gives that alter without reaching any joint: signed too, and shown in no other row. */
function familyRows({ before, after }: Sets, joints: readonly JointRows[]): DiffView['families'] {
  return union(before.families, after.families).map((family) => {
    const shown = new Set(joints.filter((j) => j.family === family).flatMap((j) => j.rows.map((r) => r.parameter)))
    const [a, b] = [before.families[family], after.families[family]]
    const key = `family:${family}`
    return { family, rows: [...fieldRows(a && { name: a.name }, b && { name: b.name }, { key, path: ['families', family] }), ...fieldRows(a?.values, b?.values, { key, path: ['families', family, 'values'] }).filter((r) => !shown.has(r.field))] }
  })
}

function diffSets(sets: Compared): DiffView {
  const { before, after } = sets
  const joints = Object.keys(after.joints).map((joint): JointRows => ({ family: after.joints[joint].family, joint, rows: jointRows(sets, joint) }))
  const filled = <T extends { rows: unknown[] }>(list: T[]) => list.filter((l) => l.rows.length > 0)
  const diff = {
    groups: foldGroups(joints).map((g) => markGroup(sets, g)),
    joints: comings(sets),
    driveTrains: filled(union(before.families, after.families).map((family) => ({ family, rows: fieldRows(before.families[family]?.driveTrain, after.families[family]?.driveTrain, { key: `drive-train:${family}`, path: ['families', family, 'driveTrain'] }) }))),
    families: filled(familyRows(sets, joints)),
    buses: filled(union(before.buses, after.buses).map((bus) => ({ bus, rows: fieldRows(before.buses[bus], after.buses[bus], { key: `bus:${bus}`, path: ['buses', bus] }) }))),
  }
  return {
    ...diff,
    counts: { values: joints.reduce((n, j) => n + j.rows.length, 0), joints: joints.filter((j) => j.rows.length > 0).length, rows: rowsOf(diff).length },
    textBefore: printSet(before),
    textAfter: printSet(after),
  }
}

/** Every row of a diff, in the order of the page. */
export const rowsOf = (diff: Pick<DiffView, 'groups' | 'joints' | 'driveTrains' | 'families' | 'buses'>): Marked[] => [
  ...diff.groups.flatMap((g) => [...g.rows, ...g.own.flatMap((o) => o.rows)]),
  ...diff.joints,
  ...[...diff.driveTrains, ...diff.families, ...diff.buses].flatMap((d) => d.rows),
]

/** Each mark of a row asks for the whole diff; it is made once for what it depends on. */
const made = new Recent<DiffView>(20)

/** Everything that a change alters, row by row and as text. */
export async function diffChange(em: EntityManager, change: Change): Promise<DiffView> {
  const before = change.baseRelease?.set ?? emptySet()
  const after = setOf(change.text)
  const [old, now] = [await schemasFor(em, before), await schemasFor(em, after)]
  const hash = sha256(canonicalize({ base: change.baseRelease?.contentHash ?? null, text: change.text, schemas: { ...old.hashes, ...now.hashes } })!)
  const known = made.get(hash)
  if (known) return known
  const diff = diffSets({ before, after, schemas: new Map(Object.entries({ ...old.schemas, ...now.schemas })) })
  made.set(hash, diff)
  return diff
}
