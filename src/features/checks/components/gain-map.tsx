import { useQuery } from '@tanstack/react-query'
import type { JointReportView, MapParameter, MapView } from '../../../../shared/contract/checks.ts'
import { StabilityMap } from '../../../components/charts/stability-map.tsx'
import { useUrlText } from '../../../components/layout/use-url-state.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Progress } from '../../../components/ui/progress.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { Waiting } from '../../../components/ui/waiting.tsx'
import { axesOf, axisAround, letters, modeOf, pickedValue, usualAxes } from '../letters.ts'
import { useStopCheck } from '../mutations.ts'
import { mapQuery } from '../queries.ts'
import { limitOf } from '../report-data.ts'
import { useCheckStream } from '../use-check-stream.ts'

/** Two values of the set that a cell stands for; the place and what it takes. */
export interface Tried {
  pointer: string
  to: number
}

export interface GainMapProps {
  change: string
  revision: number
  report: JointReportView
  base: string | null
  /** Puts a cell's values into the draft; absent where one may not. */
  onTry?: (tried: Tried[]) => void
  /** why not, beside the map */
  whyNot: string
}

/** Stability over two chosen parameters, with the released and the candidate point; a cell can be tried in the draft. */
export function GainMap({ change, revision, report, base, onTry, whyNot }: GainMapProps) {
  const mode = modeOf(report.candidate?.figures.loops ?? {})
  const choices = axesOf(mode)
  const [inX, setX] = useUrlText('x')
  const [inY, setY] = useUrlText('y')
  const known = (text: string, usual: MapParameter) => choices.find((c) => c === text) ?? usual
  const x = known(inX, usualAxes[mode][0])
  const wantedY = known(inY, usualAxes[mode][1])
  const y = wantedY === x ? (choices.find((c) => c !== x) as MapParameter) : wantedY
  const trial = (parameter: MapParameter) => ({ parameter, low: letters[parameter]!.trial[0], high: letters[parameter]!.trial[1], count: 2 })
  // Where the joint stands is answered with any map; four cells tell what to draw the map around.
  const point = useQuery(mapQuery(change, revision, { joint: report.joint, x: trial(x), y: trial(y) }))
  const around = (axis: 'x' | 'y') => [point.data?.candidate[axis], point.data?.released?.[axis]].filter((v) => v !== undefined)
  const map = useQuery({ ...mapQuery(change, revision, { joint: report.joint, x: point.data ? axisAround(x, around('x')) : trial(x), y: point.data ? axisAround(y, around('y')) : trial(y) }), enabled: point.data !== undefined })
  const stop = useStopCheck(change)
  const options = choices.map((value) => ({ value, label: letters[value]!.words }))
  const problem = point.error ?? map.error
  const view = point.data && map.data
  useCheckStream(change, view !== undefined && !view.cells)
  return (
    <section aria-label="stability map">
      {view?.cells ? (
        <Drawn view={view} cells={view.cells} report={report} base={base} onTry={onTry} />
      ) : (
        <>
          <SectionHeading>Stability map</SectionHeading>
          {problem ? (
            <ProblemPanel problem={problem} onRetry={() => void (point.error ? point : map).refetch()} />
          ) : view && view.progress.state !== 'done' && view.progress.state !== 'running' ? (
            <div className="flex flex-wrap items-center gap-3 py-3 text-13 text-plum">
              {view.progress.state === 'failed' ? view.progress.problem : 'The map was stopped; what is done is kept.'}
              <button type="button" className="link" onClick={() => void map.refetch()}>
                go on with it
              </button>
            </div>
          ) : view ? (
            <Progress label="over the map" done={view.progress.done} total={Math.max(view.progress.total, 1)} noun="cells" onStop={() => stop.mutate()} />
          ) : (
            <Waiting what="the map" lines={8} />
          )}
        </>
      )}
      <div className="no-print mt-2 flex flex-wrap gap-3">
        <Select label="Across" value={x} options={options.filter((o) => o.value !== y)} onChange={setX} />
        <Select label="Up" value={y} options={options.filter((o) => o.value !== x)} onChange={setY} />
      </div>
      <p className="no-print help">{onTry ? 'A press on a cell, or Enter, puts its values into the draft.' : whyNot}</p>
    </section>
  )
}

function Drawn({ view, cells, report, base, onTry }: { view: MapView; cells: NonNullable<MapView['cells']>; report: JointReportView; base: string | null; onTry?: GainMapProps['onTry'] }) {
  const phase = limitOf(report.findings, 'phase margin') ?? 0
  const gain = limitOf(report.findings, 'gain margin') ?? 0
  const columns = view.x.values.length
  const rows = view.y.values.map((_, j) =>
    view.x.values.map((_x, i) => {
      const k = j * columns + i
      const [phaseMarginDeg, gainMarginDb] = [cells.phaseMarginDeg[k], cells.gainMarginDb[k]]
      return { verdict: cells.verdicts[k], phaseMarginDeg, gainMarginDb, withinPolicy: cells.verdicts[k] === 'stable' && (phaseMarginDeg ?? 180) >= phase && (gainMarginDb ?? 60) >= gain }
    }),
  )
  const axis = (a: MapView['x']) => ({ label: letters[a.parameter]?.words ?? a.parameter, unit: a.unit, values: a.values, log: a.spacing === 'equal ratios' })
  const pick = (at: { x: number; y: number }) => {
    const tried = (a: MapView['x'], v: number): Tried[] => (a.pointer === null || a.perSi === null ? [] : [{ pointer: a.pointer, to: pickedValue(a.parameter, v, a.perSi) }])
    onTry?.([...tried(view.x, at.x), ...tried(view.y, at.y)])
  }
  const writable = onTry && (view.x.pointer !== null || view.y.pointer !== null)
  return (
    <StabilityMap
      x={axis(view.x)}
      y={axis(view.y)}
      cells={rows}
      candidate={{ ...view.candidate, label: 'candidate' }}
      released={report.touched && view.released ? { ...view.released, label: base ? `released ${base}` : 'released' } : undefined}
      onPick={writable ? pick : undefined}
      height={360}
    />
  )
}
