import type { MapCells } from '../../../shared/contract/checks.ts'
import { axisValues, MAP_VERDICTS, StabilityMap, type CellMargin } from '../../control/stability-map.ts'
import { verdictWords } from './linear-figures.ts'
import type { AxisInputs, MapInputs } from './requests.ts'

/** Parameters that are counted: their axis holds whole numbers. */
const counted = new Set(['W', 'D'])

/** Values along an axis; whole and without repeats where the parameter is counted. @throws NumericError bounds-crossed, not-finite */
export function valuesOfAxis(field: string, axis: AxisInputs): number[] {
  const values = Array.from(axisValues(field, axis), (v) => Number(v.toPrecision(12)))
  return counted.has(axis.parameter) ? [...new Set(values.map(Math.round))] : values
}

const mapOf = ({ model, x, y }: MapInputs, rows?: readonly [number, number]) =>
  new StabilityMap(model, { parameter: x.parameter, values: valuesOfAxis('x', x) }, { parameter: y.parameter, values: valuesOfAxis('y', y) }, { margins: true, ...(rows ? { rows } : {}) })

/** Guards a map's request as the control core does. @throws NumericError naming the axis or the parameter */
export function guardMap(inputs: MapInputs): void {
  mapOf(inputs)
}

export const gridOf = ({ x, y }: MapInputs): { width: number; rows: number } => ({ width: valuesOfAxis('x', x).length, rows: valuesOfAxis('y', y).length })

const shown = (margin: CellMargin): number | null => (margin.kind === 'margin' ? Number(margin.value.toPrecision(6)) : null)

/** Rows of constant y, `from` to `from + count`. @throws NumericError where a cell is no joint */
export function mapRows(inputs: MapInputs, from: number, count: number): MapCells {
  const map = mapOf(inputs, [from, from + count])
  map.step(map.total)
  const { rho, verdicts, phaseMarginDeg, gainMarginDb } = map.report()
  return { verdicts: Array.from(verdicts, (v) => verdictWords[MAP_VERDICTS[v]]), rho: Array.from(rho), phaseMarginDeg: phaseMarginDeg!.map(shown), gainMarginDb: gainMarginDb!.map(shown) }
}
