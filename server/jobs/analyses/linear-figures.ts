import type { JointFigures, LoopFigures, Verdict } from '../../../shared/contract/checks.ts'
import type { LinearReport, LoopReport } from '../../control/analyse.ts'
import type { GainMargin } from '../../control/margins.ts'
import type { ControlMode } from '../../control/model.ts'
import type { Verdict as ControlVerdict } from '../../control/stability.ts'

export const verdictWords: Record<ControlVerdict, Verdict> = { stable: 'stable', unstable: 'unstable', boundary: 'on the boundary' }

const reads = (margin: GainMargin): string => (margin.kind === 'unstable' ? 'unstable' : margin.kind === 'none-within' ? `above ${margin.limitDb} dB` : '')

function loopFigures(loop: LoopReport): LoopFigures {
  const { gainUp, gainDown, phase, delay, M_s, bandwidths } = loop
  const width = bandwidths?.relative
  return {
    verdict: verdictWords[loop.verdict],
    gainMarginDb: gainUp.kind === 'margin' ? gainUp.gainMarginDb : null,
    gainMarginReads: reads(gainUp),
    gainMarginDownDb: gainDown.kind === 'margin' ? gainDown.gainMarginDb : null,
    phaseMarginDeg: phase.kind === 'margin' ? phase.phaseMarginDeg : null,
    phaseMarginReads: phase.kind === 'unstable' ? 'unstable' : phase.kind === 'none-up-to' ? 'none up to 180°' : '',
    delayMarginS: delay.kind === 'margin' ? delay.delay : null,
    sensitivityPeak: M_s.kind === 'peak' ? M_s.value : null,
    bandwidthHz: width?.kind === 'bandwidth' ? width.hz : null,
    phaseMarginHz: phase.kind === 'margin' ? phase.hz : null,
    gainMarginHz: gainUp.kind === 'margin' ? gainUp.hz : null,
  }
}

/** A rate that a document can hold: a loop that is done within one hyperperiod decays without bound. */
const finite = (rate: number) => Math.max(-1e300, Math.min(1e300, rate))

/** The linear report as a check carries it. */
export function linearFigures(report: LinearReport): Omit<JointFigures, 'step' | 'heat' | 'tolerance'> {
  const loops = Object.entries(report.loops) as [ControlMode, LoopReport][]
  return {
    verdict: verdictWords[report.verdict],
    rho: report.rho,
    hyperperiodS: report.T_h,
    decayRate: finite(report.decayRate),
    slowestTimeConstantS: report.slowestTimeConstant,
    eigenvalues: report.eigenvalues.map((e) => ({ re: e.re, im: e.im, decayRate: finite(e.decayRate), frequencyHz: e.foldedHz })),
    loops: Object.fromEntries(loops.map(([name, loop]) => [name, loopFigures(loop)])),
  }
}
