import { loopNames, type CheckResult, type Finding, type HeatFigures, type JointFigures, type LoopFigures, type StepFigures, type ToleranceFigures } from '../../shared/contract/checks.ts'
import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import { cornerWords } from '../modules/checks/findings/corner-words.ts'
import { shown } from '../modules/checks/findings/finding.ts'

const or = (value: number | null, unit: string, otherwise: string) => (value === null ? otherwise : `${shown(value)} ${unit}`.trim())

/** Lines of a table, columns aligned, the first to the left. */
function table(rows: readonly string[][]): string[] {
  const widths = rows[0].map((_, c) => Math.max(...rows.map((r) => r[c].length)))
  return rows.map((r) => `  ${r.map((cell, c) => (c === 0 ? cell.padEnd(widths[c]) : cell.padStart(widths[c]))).join('  ')}`.trimEnd())
}

const loopRow = (name: string, l: LoopFigures): string[] => [
  name, l.verdict, or(l.phaseMarginDeg, '°', l.phaseMarginReads), or(l.gainMarginDb, 'dB', l.gainMarginReads), or(l.gainMarginDownDb, 'dB', '-'), or(l.delayMarginS === null ? null : l.delayMarginS * 1e3, 'ms', '-'),
  or(l.sensitivityPeak, '', '-'), or(l.bandwidthHz, 'Hz', '-'),
]

const loops = (f: JointFigures): string[] => table([['loop', 'alone', 'phase', 'gain', 'gain down', 'delay', 'M_s', 'bandwidth'], ...loopNames.flatMap((n) => (f.loops[n] ? [loopRow(n, f.loops[n])] : []))])

const unitOf = { position: 'rad', velocity: 'rad/s', current: 'A' } as const

const step = (s: StepFigures): string[] => [
  `  step of ${shown(s.stepTo)} ${unitOf[s.response]} over ${shown(s.windowS)} s: rise ${or(s.riseTimeS === null ? null : s.riseTimeS * 1e3, 'ms', 'not reached')}, overshoot ${shown(s.overshootPercent)} %, settling ${or(s.settlingTimeS === null ? null : s.settlingTimeS * 1e3, 'ms', 'does not settle')}, final error ${shown(s.finalError)} ${unitOf[s.response]}`,
  `    peak ${shown(s.peakCurrentA)} A, RMS ${shown(s.rmsCurrentA)} A, request up to ${shown(s.peakVoltageRequestV)} V, speed up to ${shown(s.peakSpeed)} rad/s, last fifth moves by ${shown(s.rippleOfResponse)} ${unitOf[s.response]} and ${shown(s.rippleOfCurrentA)} A`,
]

function tolerance(t: ToleranceFigures): string[] {
  const stable = (c: ToleranceFigures['vertices']) => `${c.stable} of ${c.points}`
  const lines = [
    `  tolerances over ${t.bounds.map((b) => `${b.name} ${shown(b.low)} to ${shown(b.high)} ${b.unit}`.trim()).join(', ')}`,
    `    stable at ${stable(t.vertices)} corners and ${stable(t.samples)} samples; largest rho ${t.worstRho.value.toPrecision(9)} at ${cornerWords(t, t.worstRho.at)}`,
  ]
  for (const name of loopNames) {
    const l = t.loops[name]
    if (!l) continue
    if (l.phaseMarginDeg) lines.push(`    ${name}: least phase margin ${shown(l.phaseMarginDeg.value)}° at ${cornerWords(t, l.phaseMarginDeg.at)}`)
    if (l.gainMarginDb) lines.push(`    ${name}: least gain margin ${shown(l.gainMarginDb.value)} dB at ${cornerWords(t, l.gainMarginDb.at)}`)
    if (l.unstable > 0) lines.push(`    ${name}: alone not stable at ${l.unstable} points`)
  }
  if (t.peakCurrentA) lines.push(`    largest current of ${t.stepsRun} steps run: ${shown(t.peakCurrentA.value)} A at ${cornerWords(t, t.peakCurrentA.at)}`)
  return lines
}

const heat = (h: HeatFigures): string =>
  `  winding from ${shown(h.ambientCelsius)} to ${shown(h.limitCelsius)} °C: bears ${shown(h.continuousCurrentA)} A for ever; at ${or(h.continuousA, 'A', 'no continuous limit')} ${or(h.steadyCelsius, '°C', h.steadyReads)}; ${or(h.peakA, 'A', 'no peak limit')} ${h.timeAtPeakS === null ? h.timeAtPeakReads : `lasts ${shown(h.timeAtPeakS)} s`}${h.nodes === 1 ? ' (one thermal node: too kind)' : ''}`

function joint(title: string, f: JointFigures): string[] {
  const poles = f.eigenvalues.filter((e) => e.im >= 0).slice(0, 4).map((e) => `${shown(Math.hypot(e.re, e.im))}${e.im === 0 ? '' : ` at ${shown(e.frequencyHz)} Hz`}`)
  return [
    title,
    `  ${f.verdict}, rho ${f.rho.toPrecision(9)} over ${shown(f.hyperperiodS * 1e3)} ms; slowest time constant ${or(f.slowestTimeConstantS === null ? null : f.slowestTimeConstantS * 1e3, 'ms', 'none: nothing decays')}; largest eigenvalues ${poles.join(', ')}`,
    ...loops(f),
    ...(f.tolerance ? tolerance(f.tolerance) : []),
    ...(f.step ? step(f.step) : []),
    ...(f.heat ? [heat(f.heat)] : []),
    '',
  ]
}

const finding = (f: Finding): string =>
  `${f.level}: ${f.kind}${f.loop ? `, ${f.loop} loop` : ''}${f.joints.length > 0 ? ` (${f.joints.join(', ')})` : ''}: ${f.text}${f.remedy ? ` ${f.remedy}` : ''} [${f.value === null ? '' : `${shown(f.value)}${f.unit ? ` ${f.unit}` : ''}; `}${f.limit === null ? '' : `limit ${shown(f.limit)}${f.unit ? ` ${f.unit}` : ''}; `}${f.source}]`

/** The whole report of a check as text: figures of each kind of joint once, then every finding. */
export function printCheck(result: CheckResult, set: MachineSet): string {
  const alike = new Map<string, { joints: string[]; figures: JointFigures }>()
  const lines: string[] = []
  for (const { joint: key, candidate } of result.joints) {
    if (!candidate) {
      lines.push(`${set.joints[key].name} (${key}): not analysed`, '')
      continue
    }
    const text = JSON.stringify(candidate)
    const group = alike.get(text)
    if (group) group.joints.push(key)
    else alike.set(text, { joints: [key], figures: candidate })
  }
  for (const { joints, figures } of alike.values()) lines.push(...joint(joints.join(', '), figures))
  lines.push(...result.findings.map(finding), '', Object.entries(result.counts).map(([level, n]) => `${n} ${level}`).join(', '))
  return `${lines.join('\n')}\n`
}
