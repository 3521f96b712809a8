import type { AskStretches } from '../../../shared/contract/checks.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { Role } from '../../../shared/registers/roles.ts'
import { rulerRange } from './ruler-range.ts'
import { isEditable, valueAtPlace, type Schemas } from './value-cells.ts'

/** Roles whose values the check can vary by themselves. */
const varied: readonly Role[] = ['position.kp', 'position.ki', 'velocity.kp', 'velocity.ki', 'current.kp', 'current.ki', 'velocity.window', 'output.delay']

/** The rulers of a joint on which an unstable stretch may lie, as asked of the check: whole bounds, so that the hatch does not move with the ruler's lower end. */
export function rulerQuestions(set: MachineSet, base: MachineSet, joint: string, schemas: Schemas): AskStretches['rulers'] {
  const settings = set.joints[joint]
  if (!settings || !Object.hasOwn(schemas, settings.firmware)) return []
  return schemas[settings.firmware].parameters.flatMap((parameter) => {
    if (!isEditable(parameter) || parameter.role === null || !varied.includes(parameter.role)) return []
    const at = valueAtPlace(set, base, { kind: 'joint', joint, family: settings.family }, parameter, schemas)
    const range = at && rulerRange(at)
    return range ? [{ parameter: parameter.name, low: range.min, high: range.max }] : []
  })
}
