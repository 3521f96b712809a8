import { LedgerEntry } from '../../../server/modules/ledger/ledger-entry.entity.ts'
import { makeMachine } from '../../../server/modules/machines/make-machine.ts'
import { Machine } from '../../../server/modules/machines/machine.entity.ts'
import { Mail } from '../../../server/modules/mail/mail.entity.ts'
import { Person } from '../../../server/modules/people/person.entity.ts'
import { RoleGrant } from '../../../server/modules/people/role-grant.entity.ts'
import type { Role } from '../../../shared/contract/people.ts'
import type { Workplace } from '../../support/workplace.ts'

/** The newest entry of the ledger. */
export async function lastEntry(w: Workplace): Promise<LedgerEntry> {
  const [entry] = await w.orm.em.fork().find(LedgerEntry, {}, { orderBy: { sequence: 'desc' }, limit: 1 })
  return entry
}

export const countEntries = (w: Workplace) => w.orm.em.fork().count(LedgerEntry)

/** Mails queued to an address, newest first. */
export const mailsTo = (w: Workplace, to: string) => w.orm.em.fork().find(Mail, { to }, { orderBy: { id: 'desc' } })

/** The secret of the newest single-use link mailed to an address. */
export async function mailedSecret(w: Workplace, to: string): Promise<string> {
  const mail = (await mailsTo(w, to)).find((m) => m.secretLink)
  if (!mail?.secretLink) throw new Error(`no link was mailed to ${to}`)
  return mail.secretLink.slice(mail.secretLink.lastIndexOf('/') + 1)
}

export const personNow = (w: Workplace, id: number) => w.orm.em.fork().findOneOrFail(Person, { id }, { populate: ['passwordHash'] })

export const grantsOf = (w: Workplace, id: number) => w.orm.em.fork().find(RoleGrant, { person: { id }, endedAt: null }, { populate: ['machine', 'confirmedBy'], orderBy: { id: 'asc' } })

/** The two machines of the tests; the maker is in the ledger as "Maker". */
export async function machines(w: Workplace) {
  const person = await w.person('Maker', [])
  await w.orm.em.fork().transactional(async (em) => {
    const by = await em.findOneOrFail(Person, { id: person.id })
    for (const [key, name] of [['dunlin', 'Dunlin'], ['teasel', 'Teasel']] as const) await makeMachine(em, { key, name, description: '', person: by, now: w.services.now() })
  })
  return w.orm.em.fork().find(Machine, {}, { orderBy: { id: 'asc' } })
}

/** Grants a role by hand, as an administrator named would have. */
export async function grantBy(w: Workplace, by: Person | null, to: Person, role: Role, { confirmed }: { confirmed: boolean }) {
  const em = w.orm.em.fork()
  const now = w.services.now()
  em.create(RoleGrant, { person: em.getReference(Person, to.id), machine: null, role, grantedBy: by ? em.getReference(Person, by.id) : null, grantedAt: now, confirmedAt: confirmed ? now : null, endedAt: null })
  await em.flush()
}
