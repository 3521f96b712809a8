import type { Logger } from 'pino'
import type { Services } from '../../http/services.ts'
import { gatherDigests } from './digest.ts'
import { Mail, markSent, markUndelivered } from './mail.entity.ts'
import { masked } from './mask.ts'
import { mailTransport, type MailTransport } from './transports.ts'

/** Mails of one round; more wait for the next, which follows at once. */
const roundSize = 20
/** How long the sender sleeps when nothing wakes it: mails that wait for their next attempt are due by then. */
const restMs = 30_000

/**
 * Sends what is due, oldest first, each marked in a transaction of its own.
 *
 * A stop between handing a mail on and marking it sends it twice, never not at all.
 *
 * @returns how many were due
 */
export async function sendDue(services: Services, transport: MailTransport, log: Logger): Promise<number> {
  const now = services.now()
  const due = await services.orm.em.fork().find(Mail, { state: 'queued', nextAttemptAt: { $lte: now } }, { orderBy: { id: 'asc' }, limit: roundSize })
  for (const mail of due) {
    const error = await transport.deliver(mail).then(
      () => null,
      (e: Error) => e,
    )
    await services.orm.em.fork().transactional(async (em) => {
      const fresh = await em.findOneOrFail(Mail, { id: mail.id })
      if (error) markUndelivered(fresh, error.message, services.now())
      else markSent(fresh, services.now())
      // Delivered, the secret is no longer needed here: a copy of the database must open nothing.
      if (!error && services.config.mode === 'workplace') Object.assign(fresh, { text: masked(fresh), secretLink: null })
    })
    if (error) log.warn({ mail: mail.id, attempt: mail.attempts + 1, reason: error.message }, 'a mail could not be delivered')
  }
  return due.length
}

export interface MailSender {
  /** something was queued: send it now */
  wake(): void
  /** finishes the mail in hand, then rests for good */
  stop(): Promise<void>
}

/** Sends queued mail for as long as the program runs. */
export function startMailSender(services: Services, log: Logger, transport: MailTransport = mailTransport(services.config)): MailSender {
  let stopped = false
  let woken = true
  let rouse = () => {}
  const rest = () =>
    new Promise<void>((resolve) => {
      const timer = setTimeout(resolve, restMs)
      rouse = () => {
        clearTimeout(timer)
        resolve()
      }
    })
  const run = async () => {
    while (!stopped) {
      woken = false
      const sent = await gatherDigests(services).then(() => sendDue(services, transport, log)).catch((error: Error) => {
        log.error({ err: error }, 'the mail sender failed; it tries again')
        return 0
      })
      if (!stopped && !woken && sent < roundSize) await rest()
    }
  }
  const running = run()
  return {
    wake() {
      woken = true
      rouse()
    },
    async stop() {
      stopped = true
      rouse()
      await running
      transport.close()
    },
  }
}
