import type { Parameter, ParameterValue } from '../../../shared/registers/parameter-schema.ts'
import { equalValues } from '../../../shared/registers/value-check.ts'

/** The number with the fewest digits that the register holds by the same raw value: 3.2 where its exact content is 3.2000000476837158. */
export function shortValue(parameter: Parameter, value: ParameterValue): ParameterValue {
  if (typeof value !== 'number') return value
  for (let digits = 1; digits < 17; digits += 1) {
    const short = Number(value.toPrecision(digits))
    if (equalValues(parameter, short, value)) return short
  }
  return value
}
