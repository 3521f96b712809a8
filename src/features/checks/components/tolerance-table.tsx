import { useState } from 'react'
import type { JointReportView, LoopName, VertexLoop, VertexRow } from '../../../../shared/contract/checks.ts'
import { csvText, downloadText } from '../../../components/charts/download.ts'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { count, formatDb, formatDegrees } from '../../../lib/format.ts'
import { boxName } from '../letters.ts'
import { cornerText, cornerUnit, limitOf } from '../report-data.ts'
import { BeforeAfter } from './before-after.tsx'

/** Corners shown before one asks for all. */
const FIRST = 8

/** Shares of 45° and 8 dB: the scale on which the corners are sorted. */
const share = (l: VertexLoop) => Math.min((l.phaseMarginDeg ?? 180) / 45, (l.gainMarginDb ?? 60) / 8)

/** The loop of a corner whose smaller margin is the smallest; an unstable one before all. */
export const worstLoop = (row: VertexRow): LoopName | null =>
  (Object.entries(row.loops) as [LoopName, VertexLoop][]).toSorted(([, a], [, b]) => Number(a.verdict === 'stable') - Number(b.verdict === 'stable') || share(a) - share(b))[0]?.[0] ?? null

/** The corners of the tolerance box, worst first, with the margins of the loop that is worst there. */
export function ToleranceTable({ report, base }: { report: JointReportView; base: string | null }) {
  const [all, setAll] = useState(false)
  const swept = report.candidate?.figures.tolerance
  const rows = report.vertices
  if (!rows || !swept)
    return (
      <section>
        <SectionHeading>Tolerance</SectionHeading>
        <p className="py-2 text-13 text-ink-2">{report.complete ? 'No value of this joint has bounds, so there is no corner to check.' : 'The corners are being walked; they appear when the joint is done.'}</p>
      </section>
    )
  const bounds = swept.vertexNames.flatMap((name) => swept.bounds.find((b) => b.name === name) ?? [])
  const limits = (loop: LoopName | null) => ({ phase: loop && (limitOf(report.findings, 'worst phase margin', loop) ?? null), gain: loop && limitOf(report.findings, 'worst gain margin', loop) })
  const misses = (row: VertexRow) =>
    row.verdict !== 'stable' ||
    (Object.entries(row.loops) as [LoopName, VertexLoop][]).some(([loop, l]) => {
      const { phase, gain } = limits(loop)
      return (phase !== null && l.phaseMarginDeg !== null && l.phaseMarginDeg < phase) || (gain !== null && l.gainMarginDb !== null && l.gainMarginDb < gain)
    })
  const missed = rows.filter(misses).length
  const { stable, points } = swept.samples
  return (
    <section>
      <SectionHeading
        aux={missed > 0 ? `${missed} of ${count(rows.length, 'corner')} outside policy` : `${count(rows.length, 'corner')}, all within policy`}
        actions={
          <button type="button" className="link no-print" onClick={() => downloadText(`tolerance-${report.joint}.csv`, csvOf(rows, swept.vertexNames))}>
            csv<span className="sr-only"> of the tolerance table</span>
          </button>
        }
      >
        Tolerance
      </SectionHeading>
      <div className="table-frame">
        <table className="table table-dense text-13" aria-label="corners of the tolerances">
          <thead>
            <tr>
              {bounds.map((b) => (
                <th key={b.name} scope="col" className="end !px-1">
                  {boxName(b.name)}
                  <br />
                  <span className="font-normal text-ink-2">{cornerUnit(b) || '\u00a0'}</span>
                </th>
              ))}
              <th scope="col" className="!px-1">loop</th>
              <th scope="col" className="end !px-1">
                phase
                <br />
                <span className="font-normal text-ink-2">°</span>
              </th>
              <th scope="col" className="end !px-1">
                gain
                <br />
                <span className="font-normal text-ink-2">dB{report.touched && base ? `, ${base} → candidate` : ''}</span>
              </th>
            </tr>
          </thead>
          <tbody>
            {(all ? rows : rows.slice(0, FIRST)).map((row) => {
              const loop = worstLoop(row)
              const now = loop ? row.loops[loop] : undefined
              const then = loop && report.touched ? row.released?.[loop] : undefined
              const { phase, gain } = limits(loop)
              return (
                <tr key={row.index}>
                  {bounds.map((b) => (
                    <td key={b.name} className="end num !px-1">{cornerText(b, row.values[b.name])}</td>
                  ))}
                  <td className="!px-1">{loop}</td>
                  {row.verdict === 'stable' && now ? (
                    <>
                      <td className={`end num !px-1 ${phase !== null && now.phaseMarginDeg !== null && now.phaseMarginDeg < phase ? 'text-plum' : ''}`}>{now.phaseMarginDeg === null ? 'none' : formatDegrees(now.phaseMarginDeg)}</td>
                      <td className={`end num !px-1 ${gain !== null && now.gainMarginDb !== null && now.gainMarginDb < gain ? 'text-plum' : ''}`}>
                        <BeforeAfter before={then && then.gainMarginDb !== null ? formatDb(then.gainMarginDb) : null} after={now.gainMarginDb === null ? 'over 60' : formatDb(now.gainMarginDb)} />
                      </td>
                    </>
                  ) : (
                    <td colSpan={2} className="end !px-1">
                      <VerdictMark verdict={row.verdict} size={14} />
                    </td>
                  )}
                </tr>
              )
            })}
          </tbody>
        </table>
      </div>
      <p className="mt-1 flex justify-between gap-3 text-12 text-ink-2">
        <span>{stable === points ? `${points} samples inside the box are stable too` : `${points - stable} of ${points} samples inside the box are not stable`}</span>
        {rows.length > FIRST && (
          <button type="button" className="link no-print" onClick={() => setAll(!all)}>
            {all ? 'the worst only' : `${rows.length - FIRST} more`}
          </button>
        )}
      </p>
    </section>
  )
}

function csvOf(rows: readonly VertexRow[], names: readonly string[]): string {
  const loops = [...new Set(rows.flatMap((r) => Object.keys(r.loops)))] as LoopName[]
  return csvText(
    ['corner', ...names, 'verdict', 'rho', ...loops.flatMap((l) => [`${l} phase margin, °`, `${l} gain margin, dB`, `${l} phase margin released, °`, `${l} gain margin released, dB`])],
    rows.map((r) => [r.index, ...names.map((n) => r.values[n]), r.verdict, r.rho, ...loops.flatMap((l) => [r.loops[l]?.phaseMarginDeg, r.loops[l]?.gainMarginDb, r.released?.[l]?.phaseMarginDeg, r.released?.[l]?.gainMarginDb])]),
  )
}
