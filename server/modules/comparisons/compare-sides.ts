import type { ComparedJoints, ComparisonView } from '../../../shared/contract/comparisons.ts'
import { same } from '../../../shared/parameters/edits.ts'
import { compareDriveTrains, compareRegisters, compareSettings, compareValues } from './compare-joints.ts'
import type { Side, SideJoint } from './side.ts'

interface Pair {
  a: SideJoint | null
  b: SideJoint | null
}

/** Joints held against each other: by key; one joint alone against the only one, or its like, of the other side. */
function pairsOf(a: Side, b: Side): Pair[] {
  if (a.joints.length === 1 && b.joints.length === 1 && a.narrowed && b.narrowed) return [{ a: a.joints[0], b: b.joints[0] }]
  if (a.narrowed) return a.joints.map((joint) => ({ a: joint, b: b.joints.find((j) => j.key === joint.key) ?? null }))
  if (b.narrowed) return b.joints.map((joint) => ({ a: a.joints.find((j) => j.key === joint.key) ?? null, b: joint }))
  const keys = [...new Set([...b.joints.map((j) => j.key), ...a.joints.map((j) => j.key)])]
  return keys.map((key) => ({ a: a.joints.find((j) => j.key === key) ?? null, b: b.joints.find((j) => j.key === key) ?? null }))
}

function compared({ a, b }: Pair): ComparedJoints {
  const joint = (b ?? a)!
  const joints = [{ key: (a ?? b)!.key, name: joint.name, keyB: joint.key }]
  if (!a || !b) return { joints, only: a ? 'a' : 'b', settings: [], driveTrain: [], values: [], registers: [], own: [], problems: [] }
  const { registers, own } = compareRegisters(a, b)
  return {
    joints, only: null, settings: compareSettings(a, b), driveTrain: compareDriveTrains(a, b), values: compareValues(a, b), registers,
    own: own.map((row) => ({ ...row, joint: joint.name })),
    problems: [a.problem, b.problem].filter((p) => p !== null),
  }
}

const isSame = (g: ComparedJoints) => g.only === null && g.settings.length + g.driveTrain.length + g.values.length + g.registers.length + g.own.length + g.problems.length === 0

/** What two groups must share to be one: all that is not a joint's own. */
const alike = ({ joints: _joints, own: _own, ...rest }: ComparedJoints) => rest

function folded(groups: readonly ComparedJoints[]): ComparedJoints[] {
  const list: ComparedJoints[] = []
  for (const group of groups) {
    const like = list.find((g) => same(alike(g), alike(group)))
    if (like) {
      like.joints.push(...group.joints)
      like.own.push(...group.own)
    } else list.push(group)
  }
  return list
}

/** A joint as text, for sides that are one joint or are held against one. */
const jointText = ({ name, settings, driveTrain, values }: SideJoint): string =>
  `${JSON.stringify({ name, ...settings, values: Object.fromEntries([...values].map(([parameter, v]) => [parameter, v.value])), driveTrain }, null, 2)}\n`

/** Two sides: by value, by register, as text. Joints that differ alike are told once. */
export function compareSides(a: Side, b: Side): ComparisonView {
  const pairs = pairsOf(a, b)
  const all = pairs.map(compared)
  const whole = a.text !== null && b.text !== null
  const text = (side: 'a' | 'b') => (whole ? (side === 'a' ? a.text! : b.text!) : pairs.map((p) => p[side]).filter((j) => j !== null).map(jointText).join('\n'))
  return {
    a: { ...a.view, joints: a.joints.length },
    b: { ...b.view, joints: b.joints.length },
    groups: folded(all.filter((g) => !isSame(g))),
    same: all.filter(isSame).flatMap((g) => g.joints.map(({ key, name }) => ({ key, name }))),
    textA: text('a'),
    textB: text('b'),
  }
}
