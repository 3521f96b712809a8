import type { ParameterSchema, ParameterValues } from './parameter-schema.ts'
import { shown } from './problem-list.ts'
import { findRuleProblems } from './rules.ts'
import { effectiveValue, label, problemOfValue, valueProblem, type ValueProblem } from './value-check.ts'

/**
 * Everything wrong with a parameter set: unknown names, values for read-only registers and constants, missing
 * values, types, register ranges, bounds, and rules over several parameters.
 */
export function findValueProblems(schema: ParameterSchema, values: ParameterValues): ValueProblem[] {
  const problems: ValueProblem[] = []
  for (const name of Object.keys(values)) {
    const parameter = schema.byName.get(name)
    if (!parameter) problems.push(valueProblem(name, 'unknown-parameter', `${shown(name)} is no parameter of this firmware version.`))
    else if (!parameter.register) problems.push(valueProblem(name, 'no-register', `${label(parameter)} is fixed by the firmware; no register holds it.`))
    else if (parameter.register.access === 'ro') problems.push(valueProblem(name, 'read-only', `${label(parameter)} is read-only: the board writes it, a set cannot.`))
  }
  for (const parameter of schema.parameters) {
    if (parameter.register?.access === 'ro') continue
    const value = effectiveValue(parameter, values)
    if (value === undefined) {
      problems.push(valueProblem(parameter.name, 'missing', `${label(parameter)} has no value and the schema gives no default.`))
      continue
    }
    const found = problemOfValue(parameter, value)
    if (found) problems.push(found)
  }
  if (problems.length === 0 && schema.rules) problems.push(...findRuleProblems(schema, values))
  return problems
}
