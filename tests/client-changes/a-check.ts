import type { CheckView, Finding, JointFigures, LoopFigures } from '../../shared/contract/checks.ts'

const loop = (over: Partial<LoopFigures>): LoopFigures => ({
  verdict: 'stable', gainMarginDb: 14.4, gainMarginReads: '14.4 dB', gainMarginDownDb: null, phaseMarginDeg: 80.7, phaseMarginReads: '80.7°', delayMarginS: null, sensitivityPeak: 1.3, bandwidthHz: 598, phaseMarginHz: 43, gainMarginHz: 190, ...over,
})

export const figures = (over: Partial<JointFigures> = {}): JointFigures => ({
  verdict: 'stable', rho: 0.99472, hyperperiodS: 0.0005, decayRate: 10.6, slowestTimeConstantS: 0.0944, eigenvalues: [{ re: 0.99472, im: 0, decayRate: 10.6, frequencyHz: 0 }], loops: { velocity: loop({ phaseMarginDeg: 46.4, gainMarginDb: 8.7 }) }, step: null, heat: null, tolerance: null, ...over,
})

export const finding = (over: Partial<Finding> = {}): Finding => ({
  key: 'torque against gear/knee', kind: 'torque against gear', level: 'concession needed', joints: ['l1-knee', 'r3-knee'], value: 6.97, limit: 6.6, unit: 'N·m', text: 'At the current limit the gear bears 6.97 N·m.', remedy: 'Lower the current limit.', source: 'data sheets', ...over,
})

export function aCheck(over: Partial<CheckView> = {}): CheckView {
  const findings = over.findings ?? [finding({ key: 'closed loop/knee', kind: 'closed loop', level: 'pass', text: 'The closed loop is stable.', remedy: '', value: null, limit: null })]
  const count = (level: Finding['level']) => findings.filter((f) => f.level === level).length
  const released = figures({ rho: 0.99631, loops: { velocity: loop({ phaseMarginDeg: 55.3, gainMarginDb: 11.4 }) } })
  return {
    inputsHash: 'a'.repeat(64), modelVersion: '1', policyNumber: 3, verdict: 'stable', checkedAt: '2026-11-30T14:02:09Z', complete: true, progress: { done: 1, total: 1, state: 'done', problem: '' },
    joints: ['l1-knee', 'r3-knee', 'winch'].map((joint) => ({ joint, touched: joint !== 'winch', candidate: figures(), released, imageSha256: 'b'.repeat(64) })),
    findings, counts: { pass: count('pass'), advise: count('advise'), 'concession needed': count('concession needed'), block: count('block') },
    ...over,
  }
}
