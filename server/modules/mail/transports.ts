import { mkdirSync } from 'node:fs'
import { open } from 'node:fs/promises'
import { join } from 'node:path'
import { createTransport } from 'nodemailer'
import type { Config } from '../../config.ts'
import { letterHtml } from './letter-html.ts'

export interface OutgoingMail {
  id: number
  to: string
  subject: string
  text: string
  createdAt: Date
}

/** Hands a mail on, or throws; the sender tries again later. */
export interface MailTransport {
  deliver(mail: OutgoingMail): Promise<void>
  close(): void
}

/** The same for each attempt, so that a receiver who gets a mail twice can tell. */
const message = (mail: OutgoingMail, from: string) => ({
  from,
  to: { name: '', address: mail.to },
  subject: mail.subject,
  text: mail.text,
  html: letterHtml(mail.subject, mail.text),
  date: mail.createdAt,
  messageId: `<mail-${mail.id}-${mail.createdAt.getTime()}@detent>`,
  disableFileAccess: true,
  disableUrlAccess: true,
})

const limits = { connectionTimeout: 10_000, greetingTimeout: 10_000, socketTimeout: 30_000 }

function smtp(url: string, from: string): MailTransport {
  const transport = createTransport({ url, ...limits })
  return {
    async deliver(mail) {
      await transport.sendMail(message(mail, from))
    },
    close: () => transport.close(),
  }
}

/**
 * Sends nothing: the mail stays in its table, to be read at /mail. In a real workplace, where links are masked there, it is also
 * written as a file that only the operator of the machine can read, so that a first link can be passed on by hand.
 */
function local({ dataDir, mode, mailFrom }: Config): MailTransport {
  const folder = join(dataDir, 'mail')
  const transport = createTransport({ streamTransport: true, buffer: true, newline: 'unix' })
  return {
    async deliver(mail) {
      const sent = await transport.sendMail(message(mail, mailFrom))
      if (mode !== 'workplace') return
      mkdirSync(folder, { recursive: true, mode: 0o700 })
      const file = await open(join(folder, `${String(mail.id).padStart(6, '0')}.eml`), 'w', 0o600)
      try {
        await file.chmod(0o600)
        await file.writeFile(sent.message as Buffer)
        await file.sync()
      } finally {
        await file.close()
      }
    },
    close: () => transport.close(),
  }
}

export const mailTransport = (config: Config): MailTransport => (config.smtpUrl === null ? local(config) : smtp(config.smtpUrl, config.mailFrom))
