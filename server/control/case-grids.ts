import type { Figure, Tally } from './case-tally.ts'
import type { ControlMode, JointModel } from './model.ts'
import { parameterNamed, withValues } from './parameters.ts'
import { evaluatePoint } from './point.ts'
import { MAP_VERDICTS, stabilityMap, type CellMargin } from './stability-map.ts'
import { sweepTolerance, type Worst } from './tolerance.ts'

export interface SweepCase extends JointModel {
  readonly id: string
  readonly box: Record<string, readonly [number, number]>
  readonly names: readonly string[]
  readonly expect: Record<string, unknown> & { readonly tol: number; readonly rho_of_corners: readonly number[] }
}

export interface MapCase extends JointModel {
  readonly id: string
  readonly x: { readonly parameter: string; readonly values: readonly number[] }
  readonly y: { readonly parameter: string; readonly values: readonly number[] }
  readonly expect: Record<string, unknown> & { readonly rho_tol: number; readonly pm_tol: number; readonly gm_tol: number }
}

/** Checks a tolerance sweep over its corners: control-cases.json `sweeps`. */
export function checkSweep(tally: Tally, item: SweepCase): void {
  const { id, expect } = item
  const box = Object.fromEntries(item.names.map((name) => [name, item.box[name]]))
  for (const name of Object.keys(item.box)) if (!item.names.includes(name)) tally.fail(`${id}: bound ${name} is not among the names`)
  const report = sweepTolerance(item, box, { seed: 0, samples: 0, margins: true })
  for (const [key, value] of Object.entries(expect)) {
    const at = `${id} ${key}`
    switch (key) {
      case 'tol':
      case 'routes':
        break
      case 'rho_of_corners':
        tally.same(`${at} count`, report.rhoOfVertices.length, expect.rho_of_corners.length)
        expect.rho_of_corners.forEach((rho, k) => tally.close(`${at}[${k}]`, report.rhoOfVertices[k] ?? null, rho, expect.tol))
        break
      case 'worst_rho':
        tally.close(at, report.worstRho.kind === 'worst' ? report.worstRho.value : null, value as number, expect.tol)
        break
      case 'worst_corner': {
        const theirs = report.rhoOfVertices[value as number]
        const worst = report.worstRho.kind === 'worst' ? report.worstRho : null
        tally.pass(worst !== null && (worst.at.index === value || Math.abs(theirs - worst.value) <= expect.tol), () => `${at}: ${String(worst?.at.index)} where ${String(value)} is expected`)
        break
      }
      case 'stable':
        tally.same(at, report.vertices.stable, value)
        break
      case 'loops':
        for (const [loop, figures] of Object.entries(value as Record<string, Record<string, unknown>>)) checkSweepLoop(tally, item, `${id} ${loop}`, report.loops[loop as ControlMode], loop as ControlMode, figures)
        break
      default:
        tally.fail(`${at}: this figure is not known here`)
    }
  }
}

type LoopTolerance = ReturnType<typeof sweepTolerance>['loops'][ControlMode]

function checkSweepLoop(tally: Tally, item: SweepCase, name: string, loop: LoopTolerance, closure: ControlMode, figures: Record<string, unknown>): void {
  if (!loop) {
    tally.fail(`${name}: the joint closes no such loop`)
    return
  }
  for (const [key, value] of Object.entries(figures)) {
    const at = `${name} ${key}`
    if (key === 'unstable_corners') {
      tally.same(at, JSON.stringify(loop.unstableVertices), JSON.stringify(value))
    } else if (key === 'smallest_phase_margin_deg_of_stable_corners') {
      checkWorst(tally, item, at, loop.phaseMarginDeg, value as Figure | null, (point) => {
        const phase = point.loops[closure]?.phase
        return phase?.kind === 'margin' ? phase.phaseMarginDeg : null
      })
    } else if (key === 'smallest_gain_margin_db_of_stable_corners') {
      checkWorst(tally, item, at, loop.gainMarginDb, value as Figure | null, (point) => {
        const gain = point.loops[closure]?.gainUp
        return gain?.kind === 'margin' ? gain.gainMarginDb : null
      })
    } else {
      tally.fail(`${at}: this figure is not known here`)
    }
  }
}

function checkWorst(tally: Tally, item: SweepCase, name: string, worst: Worst, figure: Figure | null, read: (point: ReturnType<typeof evaluatePoint>) => number | null): void {
  const ours = worst.kind === 'worst' ? worst : null
  if (figure === null || figure.value === null) {
    tally.pass(ours === null, () => `${name}: ${String(ours?.value)} where none is expected`)
    return
  }
  tally.known(name, figure, ['value', 'tol', 'tol_rel', 'corner', 'reads', 'routes'])
  tally.figure(name, figure, ours?.value ?? null)
  if (!('corner' in figure)) return
  const corner = figure.corner as number
  let agrees = ours?.at.index === corner
  if (ours && !agrees) {
    // Two corners may tie: then theirs must have our value.
    const values = item.names.map((bound, j) => item.box[bound][Math.floor(corner / 2 ** j) % 2])
    const there = read(evaluatePoint(withValues(item, item.names.map(parameterNamed), values), true))
    agrees = there !== null && Math.abs(there - ours.value) <= (figure.tol ?? 0)
  }
  tally.pass(agrees, () => `${name} corner: ${String(ours?.at.index)} where ${corner} is expected`)
}

/** Checks a stability map cell by cell: control-cases.json `maps`. */
export function checkMap(tally: Tally, item: MapCase): void {
  const { id, expect } = item
  const report = stabilityMap(item, item.x, item.y, { margins: true })
  const width = item.x.values.length
  const at = (row: number, column: number): number => row * width + column
  for (const [key, value] of Object.entries(expect)) {
    const name = `${id} ${key}`
    switch (key) {
      case 'rows_are':
      case 'rho_tol':
      case 'pm_tol':
      case 'gm_tol':
      case 'margin_null':
      case 'routes':
        break
      case 'verdicts':
        ;(value as string[]).forEach((row, r) => {
          for (let c = 0; c < row.length; c++) tally.same(`${name}[${r}][${c}]`, MAP_VERDICTS[report.verdicts[at(r, c)]][0], row[c])
        })
        break
      case 'rho':
        ;(value as number[][]).forEach((row, r) => row.forEach((rho, c) => tally.close(`${name}[${r}][${c}]`, report.rho[at(r, c)], rho, expect.rho_tol)))
        break
      case 'smallest_phase_margin_deg':
        checkCells(tally, name, value as (number | null)[][], (r, c) => report.phaseMarginDeg?.[at(r, c)], expect.pm_tol)
        break
      case 'smallest_gain_margin_db':
        checkCells(tally, name, value as (number | null)[][], (r, c) => report.gainMarginDb?.[at(r, c)], expect.gm_tol)
        break
      case 'nearest_to_boundary':
        tally.close(name, Math.min(...Array.from(report.rho, (rho) => Math.abs(rho - 1))), value as number, expect.rho_tol)
        break
      default:
        tally.fail(`${name}: this figure is not known here`)
    }
  }
}

function checkCells(tally: Tally, name: string, rows: readonly (readonly (number | null)[])[], read: (r: number, c: number) => CellMargin | undefined, tol: number): void {
  rows.forEach((row, r) =>
    row.forEach((value, c) => {
      const cell = read(r, c)
      tally.figure(`${name}[${r}][${c}]`, { value, tol }, cell?.kind === 'margin' ? cell.value : null)
    }),
  )
}
