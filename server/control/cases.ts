import { checkMap, checkSweep, type MapCase, type SweepCase } from './case-grids.ts'
import { checkLinear, checkResponse, type LinearCase, type ResponseCase } from './case-linear.ts'
import { Tally } from './case-tally.ts'
import { checkClosedForm, checkNonlinear, checkRefusal, checkThermal, type ClosedFormCase, type NonlinearCase, type RefusalCase, type ThermalCase } from './case-time.ts'

export interface CaseRun {
  /** One for each figure that falls short. */
  readonly lines: string[]
  readonly passed: number
  readonly failed: number
}

/** Texts, and plants that the cases repeat in full. */
const REMARKS = ['format', 'units', 'specification', 'plants']

/**
 * Runs a file of control cases through the same code that serves checks.
 *
 * Every figure is compared against its own tolerance; a figure, section or key that is not known here counts as failed.
 *
 * @param json  the parsed file
 */
export function runCases(json: unknown): CaseRun {
  const tally = new Tally()
  if (typeof json !== 'object' || json === null || Array.isArray(json)) {
    tally.fail('The file holds no object of case sections; nothing was run.')
    return tally
  }
  const file = json as Record<string, unknown>
  const cases = Array.isArray(file.cases) ? (file.cases as LinearCase[]) : []
  for (const [section, value] of Object.entries(file)) {
    if (REMARKS.includes(section)) continue
    if (!Array.isArray(value)) {
      tally.fail(`${section}: not a list of cases`)
      continue
    }
    value.forEach((item: unknown, k) => {
      const name = String((item as { id?: unknown } | null)?.id ?? `${section}[${k}]`)
      tally.guarded(name, () => runOne(tally, section, item, cases))
    })
  }
  return tally
}

function runOne(tally: Tally, section: string, item: unknown, cases: readonly LinearCase[]): void {
  switch (section) {
    case 'cases':
      return checkLinear(tally, item as LinearCase)
    case 'frequency_response':
      return checkResponse(tally, item as ResponseCase, cases)
    case 'nonlinear':
      return checkNonlinear(tally, item as NonlinearCase)
    case 'sweeps':
      return checkSweep(tally, item as SweepCase)
    case 'maps':
      return checkMap(tally, item as MapCase)
    case 'thermal':
      return checkThermal(tally, item as ThermalCase)
    case 'closed_forms':
      return checkClosedForm(tally, item as ClosedFormCase)
    case 'refusals':
      return checkRefusal(tally, item as RefusalCase)
    default:
      tally.fail(`${section}: this section is not known here`)
  }
}
