import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { administrators } from '../people/last-administrator.ts'
import { Person } from '../people/person.entity.ts'
import type { MadeBackup } from './make-backup.ts'

interface Recording {
  /** who asked; null for the program itself */
  person: Person | null
  now: Date
}

/** A backup that was made, with what tells it from every other, and those that made room for it. */
export async function recordBackup(em: EntityManager, { made: { name, record }, takenAway, person, now }: Recording & { made: MadeBackup; takenAway: readonly string[] }): Promise<void> {
  await appendEntry(em, {
    at: now,
    person,
    act: 'backup made',
    details: { name, occasion: record.occasion, sha256: record.database.sha256, bytes: record.database.bytes, files: record.files.sha256.length, trouble: record.trouble, orphans: record.orphans.length, privateKey: record.privateKey, takenAway },
  })
  if (record.trouble.length > 0)
    await tellAdministrators(em, 'A backup lacks stored files', `The backup ${name} was made, but ${record.trouble.length} stored ${record.trouble.length === 1 ? 'file is' : 'files are'} not in it:\n\n${record.trouble.map((t) => `${t.sha256}: ${t.what}`).join('\n')}\n\nDownloads that need such a file are refused. Take it from an older backup: it lies there under the same name.\n`, now)
}

/** A backup that was not made, told to those who keep the workplace. */
export async function recordFailure(em: EntityManager, { why, now }: { why: string; now: Date }): Promise<void> {
  await appendEntry(em, { at: now, person: null, act: 'backup failed', details: { why } })
  await tellAdministrators(em, 'No backup was made', `Detent could not make its daily backup:\n\n${why}\n\nThe backups made before are kept. It tries again every hour; look at the disk and at the backups page.\n`, now)
}

async function tellAdministrators(em: EntityManager, subject: string, text: string, now: Date) {
  for (const person of await em.find(Person, { id: { $in: [...(await administrators(em))] } })) queueMail(em, { person, topic: 'workplace', subject, text, now })
}
