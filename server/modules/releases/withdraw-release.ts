import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { boardLines, boardsHolding, whoFlashed } from '../boards/boards-holding.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { Person } from '../people/person.entity.ts'
import type { Release } from './release.entity.ts'
import { Withdrawal } from './withdrawal.entity.ts'

/** A release that must no longer be flashed, from now on and for good. Everybody who flashed it is told why, and which boards hold it. */
export async function withdrawRelease(em: EntityManager, release: Release, { reason, person, now }: { reason: string; person: Person; now: Date }): Promise<void> {
  if (await em.count(Withdrawal, { release })) throw new DomainError('wrong-state', `${release.machine.name} ${release.version} is withdrawn already. Nothing was altered.`)
  em.create(Withdrawal, { release, person: em.getReference(Person, person.id), at: now, reason })
  const boards = await boardsHolding(em, release)
  await appendEntry(em, { at: now, person, act: 'release withdrawn', subject: { machine: release.machine.key, release: release.version }, details: { reason, sequence: release.sequence, boards: boards.map((b) => b.serial) } })
  const name = `${release.machine.name} ${release.version}`
  const held = boards.length === 0 ? 'No board is on record with it.' : `Flash these boards again before they run; they hold it, as recorded or read back:\n\n${boardLines(boards)}`
  for (const builder of await whoFlashed(em, release))
    queueMail(em, { person: builder, topic: 'withdrawal', subject: `Withdrawn: ${name}`, text: `${person.name} withdrew ${name}, which you flashed. It must no longer be flashed.\n\n${reason.trim()}\n\n${held}\n`, now })
}
