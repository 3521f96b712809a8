import type { ChangeView } from '../../../shared/contract/changes.ts'
import type { CheckView, Finding } from '../../../shared/contract/checks.ts'
import { asRecord, effectiveValues } from '../../../shared/parameters/effective.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { findValueProblems } from '../../../shared/registers/find-value-problems.ts'
import { count } from '../../lib/format.ts'
import type { Saving } from './draft-keeper.ts'
import type { Schemas } from './value-cells.ts'

export interface Need {
  state: 'met' | 'open' | 'waiting'
  /** how grave an open one is, for its mark */
  level: 'advise' | 'concession needed' | 'block'
  words: string
}

/** Joints whose values don't fit their firmware's schema. A joint whose schema is not read yet is left to the server. */
export function unfitJoints(set: MachineSet, schemas: Schemas): string[] {
  return Object.keys(set.joints).filter((joint) => {
    const { firmware, family } = set.joints[joint]
    if (!Object.hasOwn(schemas, firmware) || !Object.hasOwn(set.families, family)) return false
    return findValueProblems(schemas[firmware], asRecord(effectiveValues(set, joint, schemas[firmware].parameters.filter((p) => p.register !== null && p.register.access !== 'ro')))).length > 0
  })
}

/** Findings outside policy for which nothing is requested yet. */
export const unrequested = (findings: readonly Finding[], change: Pick<ChangeView, 'concessions'>): Finding[] =>
  findings.filter((f) => f.level === 'concession needed' && !change.concessions.some((c) => c.finding === f.key))

export interface Standing {
  change: ChangeView
  set: MachineSet
  saving: Saving
  check: CheckView | undefined
  /** the check shown is not of the values as they stand */
  stale: boolean
  /** joints whose values don't fit their schema; looked up once for each set, since it takes every value of every joint */
  unfit: readonly string[]
}

/** What must hold before a change can be submitted, each in words. The server judges for itself when it is. */
export function submitNeeds({ change, set, saving, check, stale, unfit }: Standing): Need[] {
  const joints = Object.keys(set.joints).length
  const open = check ? unrequested(check.findings, change) : []
  const blocks = check?.counts.block ?? 0
  return [
    saving === 'saved' ? null : { state: saving === 'waiting' || saving === 'sending' ? 'waiting' : 'open', level: 'block', words: saving === 'waiting' || saving === 'sending' ? 'everything is being saved' : 'not everything is saved yet' },
    unfit.length === 0 ? { state: 'met', level: 'block', words: `values fit the schema on ${count(joints, 'joint')}` } : { state: 'open', level: 'block', words: `values don't fit the schema on ${unfit.map((j) => set.joints[j].name).join(', ')}` },
    !check || stale
      ? { state: 'waiting', level: 'block', words: 'the check is running on the values as they stand' }
      : blocks === 0
        ? check.complete
          ? { state: 'met', level: 'block', words: 'check is fresh, nothing blocks' }
          : { state: check.progress.state === 'running' ? 'waiting' : 'open', level: 'block', words: check.progress.state === 'running' ? 'the check is walking over the tolerances' : 'the check is not complete: go on with it' }
        : { state: 'open', level: 'block', words: `${count(blocks, 'finding')} ${blocks === 1 ? 'blocks' : 'block'}` },
    !check || (open.length === 0 && change.concessions.length === 0) ? null
      : open.length === 0 ? { state: 'met', level: 'concession needed', words: `${count(change.concessions.length, 'concession')} requested` }
        : { state: 'open', level: 'concession needed', words: `${count(open.length, 'concession')} still to be requested` },
    change.reason.trim() === '' ? { state: 'open', level: 'advise', words: 'the reason is still to be written' } : { state: 'met', level: 'advise', words: 'the reason is written' },
  ].filter((n): n is Need => n !== null)
}
