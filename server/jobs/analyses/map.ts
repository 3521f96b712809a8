import type { MapCells } from '../../../shared/contract/checks.ts'
import { evaluatePoint, type LoopPoint } from '../../control/point.ts'
import { parameterNamed, withValues } from '../../control/parameters.ts'
import { axisValues, StabilityMap } from '../../control/stability-map.ts'
import { verdictWords } from './linear-figures.ts'
import type { AxisInputs, MapInputs } from './requests.ts'

/** Parameters that are counted: their axis holds whole numbers. */
const counted = new Set(['W', 'D'])

/** Values along an axis; whole and without repeats where the parameter is counted. @throws NumericError bounds-crossed, not-finite */
export function valuesOfAxis(field: string, axis: AxisInputs): number[] {
  const values = Array.from(axisValues(field, axis), (v) => Number(v.toPrecision(12)))
  return counted.has(axis.parameter) ? [...new Set(values.map(Math.round))] : values
}

/** Guards a map's request as the control core does. @throws NumericError naming the axis or the parameter */
export function guardMap({ model, x, y }: MapInputs): void {
  new StabilityMap(model, { parameter: x.parameter, values: valuesOfAxis('x', x) }, { parameter: y.parameter, values: valuesOfAxis('y', y) }, { margins: true })
}

export const cellCount = ({ x, y }: MapInputs): number => valuesOfAxis('x', x).length * valuesOfAxis('y', y).length

/** Cells `from` to `from + count`, rows of constant y, each along x. A cell outside the model's rules is no cell. @throws NumericError */
export function mapCells({ model, x, y }: MapInputs, from: number, count: number): MapCells {
  const [xs, ys] = [valuesOfAxis('x', x), valuesOfAxis('y', y)]
  const names = [parameterNamed(x.parameter), parameterNamed(y.parameter)]
  const cells: MapCells = { verdicts: [], rho: [], phaseMarginDeg: [], gainMarginDb: [] }
  for (let k = from; k < from + count; k += 1) {
    const point = evaluatePoint(withValues(model, names, [xs[k % xs.length], ys[Math.floor(k / xs.length)]]), true)
    const loops = Object.values(point.loops)
    const whole = point.verdict === 'stable' && loops.every((l) => l.verdict === 'stable')
    const smallest = (read: (l: LoopPoint) => number | null) => {
      const found = whole ? loops.map(read).filter((v) => v !== null) : []
      return found.length === 0 ? null : Number(Math.min(...found).toPrecision(6))
    }
    cells.verdicts.push(verdictWords[point.verdict])
    cells.rho.push(point.rho)
    cells.phaseMarginDeg.push(smallest((l) => (l.phase.kind === 'margin' ? l.phase.phaseMarginDeg : null)))
    cells.gainMarginDb.push(smallest((l) => (l.gainUp.kind === 'margin' ? l.gainUp.gainMarginDb : null)))
  }
  return cells
}
