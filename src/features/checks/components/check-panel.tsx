import type { UseQueryResult } from '@tanstack/react-query'
import { useMemo } from 'react'
import type { ReactNode } from 'react'
import type { CheckView, JointCheck, QuickView } from '../../../../shared/contract/checks.ts'
import { PolePlot } from '../../../components/charts/pole-plot.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { EmptyState } from '../../../components/ui/empty-state.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { Waiting } from '../../../components/ui/waiting.tsx'
import { count, formatQuantity } from '../../../lib/format.ts'
import { figuresOf, worstOf } from '../figures.ts'
import { BeforeAfter } from './before-after.tsx'
import { FigureRows } from './figure-rows.tsx'
import { FindingList } from './finding-list.tsx'
import { JointsTouched } from './joints-touched.tsx'
import { StepOverlay } from './step-overlay.tsx'
import { ToleranceWalk } from './tolerance-walk.tsx'

export interface CheckPanelProps {
  change: string
  query: UseQueryResult<CheckView>
  /** the values on the screen are newer than those checked */
  stale: boolean
  /** one joint with what is typed, where that is known sooner than the whole check; stale while a later key is being looked at */
  quick?: { view: QuickView; stale: boolean }
  /** joints looked at */
  joints: readonly string[]
  nameOf: (joint: string) => string
  reportTo: string
  /** at the end of a finding */
  note?: (finding: CheckView['findings'][number]) => ReactNode
}

/**
 * The live check beside the editor: what the values on the screen do. The joint looked at comes first, within a blink; what is older stays, marked at
 * its edge, while the next is computed, and says so.
 */
export function CheckPanel({ change, query, stale, quick, joints, nameOf, reportTo, note }: CheckPanelProps) {
  const check = query.data
  // Long lists beside what alters at every key: drawn again when they alter themselves.
  const rest = useMemo(
    () =>
      check && (
        <>
          <JointsTouched check={check} nameOf={nameOf} />
          <SectionHeading level={3} className="mt-4 mb-1" actions={<TextLink to={reportTo}>full report</TextLink>}>
            Findings
          </SectionHeading>
          {check.findings.length === 0 ? <EmptyState title="Nothing to judge yet">Findings appear with the first joint.</EmptyState> : <FindingList findings={check.findings} nameOf={nameOf} narrow note={note} />}
        </>
      ),
    [check, nameOf, reportTo, note],
  )
  if (!check) return query.isError ? <ProblemPanel problem={query.error} onRetry={() => void query.refetch()} /> : <Waiting what="the check" lines={6} />
  const shown = check.joints.filter((j) => joints.includes(j.joint))
  const early = stale ? quick?.view : undefined
  const old = stale && (quick?.stale ?? true)
  const worst = early?.joint ?? worstOf(shown)
  // Marked by its edge, not by fainter ink: what is stale is read all the same.
  const aged = (older: boolean) => (older ? '-ml-2 border-l-2 border-dashed border-plum pl-[6px]' : '')
  return (
    <section aria-label="live check" aria-busy={stale}>
      {query.isError && <ProblemPanel className="mb-3" problem={query.error} onRetry={() => void query.refetch()} />}
      <div className={aged(old)}>
        <Head check={check} joint={worst} state={old ? 'stale' : early ? 'early' : 'fresh'} among={shown.length} nameOf={nameOf} />
      </div>
      {!stale && <ToleranceWalk change={change} check={check} className="border-b border-hairline py-2" />}
      {worst?.candidate ? (
        <>
          <div className={aged(old)}>
            <JointFiguresShown joint={worst} findings={early?.findings ?? check.findings} nameOf={nameOf} />
          </div>
          <div className={aged(stale)}>
            <StepOverlay change={change} inputs={check.inputsHash} joint={worst.joint} enabled={!stale} />
          </div>
        </>
      ) : (
        <p className="border-b border-hairline py-3 text-13 text-ink-2">{worst ? `Nothing was computed for ${nameOf(worst.joint)}; the findings say why.` : 'No joint stands here yet.'}</p>
      )}
      <div className={aged(stale)}>{rest}</div>
    </section>
  )
}

function Head({ check, joint, state, among, nameOf }: { check: CheckView; joint: JointCheck | null; state: 'fresh' | 'early' | 'stale'; among: number; nameOf: (joint: string) => string }) {
  const figures = joint?.candidate
  const released = joint?.released ?? null
  const slow = (s: number | null | undefined) => (s === null || s === undefined ? null : s * 1e3)
  const others = state === 'fresh' && check.verdict !== null && check.verdict !== figures?.verdict
  return (
    <div className="flex flex-wrap items-start gap-x-4 gap-y-1 border-b border-ink pb-3">
      <div className="min-w-0 flex-1">
        <div aria-live="polite">
          {figures ? <VerdictMark verdict={figures.verdict} size={32} className="text-20 font-medium" /> : <span className="text-20 font-medium text-ink-2">no verdict</span>}
        </div>
        {figures && (
          <div className="mt-1 pl-[39px] text-13">
            <div>
              ρ <BeforeAfter before={released ? released.rho.toFixed(5) : null} after={figures.rho.toFixed(5)} className="num" />
            </div>
            <div>
              <span className="text-ink-2">slowest </span>
              <BeforeAfter before={slow(released?.slowestTimeConstantS)} after={slow(figures.slowestTimeConstantS) ?? 'does not decay'} unit="ms" />
            </div>
          </div>
        )}
      </div>
      <div className="text-right text-12 text-ink-2">
        {state === 'early' ? (
          <>
            as typed, the rest follows
            <br />
          </>
        ) : state === 'stale' ? (
          <span className="text-plum">
            stale, checking
            <br />
          </span>
        ) : (
          <>
            checked <Time at={check.checkedAt} style="clock" />
            <br />
          </>
        )}
        decoded registers
        {joint && among > 1 && (
          <>
            <br />
            {nameOf(joint.joint)}, worst of {count(among, 'joint')}
          </>
        )}
      </div>
      {others && (
        <p className="w-full text-13">
          elsewhere in the change: <VerdictMark verdict={check.verdict!} size={15} />
        </p>
      )}
    </div>
  )
}

function JointFiguresShown({ joint, findings, nameOf }: { joint: JointCheck; findings: CheckView['findings']; nameOf: (joint: string) => string }) {
  const figures = figuresOf(joint, findings)
  const period = formatQuantity(joint.candidate!.hyperperiodS, 's')
  return (
    <>
      {figures.length > 0 && <FigureRows figures={figures} label={`margins of ${nameOf(joint.joint)}`} />}
      <PolePlot
        title="Poles"
        level={3}
        className="mt-4"
        aux={`over ${period.number} ${period.unit}`}
        hideLegend={joint.released === null || !joint.touched}
        sets={[
          ...(joint.released && joint.touched ? [{ label: 'released', role: 'released' as const, poles: joint.released.eigenvalues }] : []),
          { label: 'candidate', role: 'candidate' as const, poles: joint.candidate!.eigenvalues },
        ]}
      />
    </>
  )
}
