import type { EntityManager } from '@mikro-orm/core'
import type { IdentificationView, UseIdentified } from '../../../shared/contract/evidence.ts'
import { DomainError } from '../../http/errors.ts'
import { draftChange } from '../changes/draft-change.ts'
import { changeKey, again as againChange } from '../changes/locate.ts'
import { inState } from '../changes/permissions.ts'
import { saveEdits } from '../changes/save-draft.ts'
import type { Change } from '../changes/change.entity.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { again } from './locate.ts'
import type { Evidence } from './evidence.entity.ts'

interface Using {
  asked: UseIdentified
  /** the draft asked for; null: a new change */
  change: Change | null
  identified: IdentificationView
  person: Person
  now: Date
}

/** The values asked for, each with its edit. @throws DomainError invalid-request naming a letter that the log does not give */
function chosen({ asked, identified }: Using) {
  const wanted = asked.letters.map((letter) => identified.values.find((v) => v.letter === letter)!)
  const missing = wanted.filter((v) => v.edit === null)
  if (missing.length > 0)
    throw new DomainError('invalid-request', `The log gives no ${missing.map((v) => v.letter).join(', ')} that could be used. Nothing was drafted.`, {
      fields: missing.map((v) => ({ pointer: `/letters/${asked.letters.indexOf(v.letter)}`, detail: v.unusable || `${v.reason} ${v.remedy}`.trim() })),
    })
  return wanted.map((v) => ({ ...v, edit: v.edit! }))
}

/**
 * Writes identified values into a draft, or drafts a change with them; a log that speaks for no change yet speaks for that one from then on.
 *
 * @throws DomainError invalid-request, wrong-state, value-conflict, not-permitted
 */
export async function useIdentified(em: EntityManager, evidence: Evidence, using: Using): Promise<Change> {
  const { asked, person, now } = using
  const values = chosen(using)
  const fresh = await again(em, evidence)
  const told = values.map((v) => v.letter).join(', ')
  const change = using.change
    ? await againChange(em, using.change)
    : await draftChange(em, {
        machine: fresh.machine, title: asked.title ?? `${fresh.jointKey}: ${told} as identified`, person, now,
        reason: `${told} identified from the bench log ${fresh.name} (evidence ${fresh.number}, SHA-256 ${fresh.sha256}), winding at ${asked.T_winding} °C.`,
      })
  const open = inState(change, 'draft')
  if (!open.allowed) throw new DomainError('wrong-state', `${open.why} Values are written into drafts only. Nothing was altered.`)
  await saveEdits(em, change, values.map((v) => v.edit), { person, now })
  if (!fresh.change) fresh.change = change
  await appendEntry(em, {
    at: now, person, act: 'identified values used', subject: { machine: fresh.machine.key, joint: fresh.jointKey, change: changeKey(change) },
    details: { evidence: fresh.number, sha256: fresh.sha256, values: Object.fromEntries(values.map((v) => [v.letter, { value: v.value, standardError: v.standardError, unit: v.unit }])) },
  })
  return change
}
