import type { EntityManager } from '@mikro-orm/core'
import { queueMail } from '../mail/queue-mail.ts'
import { releaseManagersOf } from '../policy/signers.ts'
import type { Release } from '../releases/release.entity.ts'
import { Withdrawal } from '../releases/withdrawal.entity.ts'
import type { Board } from './board.entity.ts'
import { boardLines } from './boards-holding.ts'
import type { Speaker } from './speaker.ts'

/** Mails the release managers when boards are recorded as flashed with a release that is withdrawn: somebody has to see to it that they do not run so. */
export async function tellOfWithdrawn(em: EntityManager, release: Release, boards: readonly Board[], { person, now }: Speaker): Promise<void> {
  const withdrawal = await em.findOne(Withdrawal, { release })
  if (!withdrawal || boards.length === 0) return
  const name = `${release.machine.name} ${release.version}`
  for (const manager of await releaseManagersOf(em, release.machine, person)) {
    const text = [`${manager.name},`, '', `${person.name} recorded a flash of ${name}, which is withdrawn:`, '', withdrawal.reason.trim(), '', 'These boards hold it now; they must not run with it:', '', boardLines(boards), '', 'Detent', ''].join('\n')
    queueMail(em, { person: manager, topic: 'withdrawal', subject: `Flashed though withdrawn: ${name}`, text, now })
  }
}
