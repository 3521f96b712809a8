import type { Side } from '../prepare-check.ts'
import type { CheckInputs } from '../check-inputs.ts'
import type { RawFinding } from './finding.ts'

/** Firmware versions that are no ground to release on: drafts never, retired ones not for what the change touches. */
export function firmwareFindings(inputs: CheckInputs, touched: ReadonlySet<string>): RawFinding[] {
  return Object.entries(inputs.candidate.joints).flatMap(([joint, { firmware, family }]): RawFinding[] => {
    const state = inputs.firmwareStates[firmware]
    const base = { place: family, joint, kind: 'firmware version', value: null, limit: null, unit: '', source: 'product rule', pointer: `/joints/${joint}/firmware` }
    if (state === 'draft') return [{ ...base, level: 'block', text: `${firmware} is a draft.`, remedy: 'Its register map may still move; a release manager publishes it first.' }]
    if (state === 'retired') return [{ ...base, level: touched.has(joint) ? 'concession needed' : 'advise', text: `${firmware} is retired.`, remedy: 'Move the joint to a published version.' }]
    return []
  })
}

/** What keeps a joint from being encoded. */
export const refusedFindings = (place: string, { resolved }: Side & { kind: 'refused' }): RawFinding[] =>
  resolved.problems.map((p) => ({
    place, joint: resolved.joint, kind: `value ${p.pointer.split('/').at(-1)}`, level: 'block', value: null, limit: null, unit: '', text: `${p.detail.replace(/\.$/, '')}.`,
    remedy: 'Nothing can be encoded for the joint; correct the value.', source: "the firmware version's schema", pointer: p.pointer,
  }))

/** A loop that could not be analysed at all. */
export const noAnalysis = (place: string, joint: string, text: string, remedy: string, kind = 'closed loop'): RawFinding => ({ place, joint, kind, level: 'block', value: null, limit: null, unit: '', text, remedy, source: 'server/control/MODEL.md' })
