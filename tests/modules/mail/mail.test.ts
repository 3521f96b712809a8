import { mkdtempSync, readdirSync, readFileSync, rmSync, statSync } from 'node:fs'
import type { AddressInfo } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { pino } from 'pino'
import { SMTPServer } from 'smtp-server'
import supertest from 'supertest'
import { afterAll, describe, expect, it } from 'vitest'
import { Mail } from '../../../server/modules/mail/mail.entity.ts'
import { masked } from '../../../server/modules/mail/mask.ts'
import { queueMail } from '../../../server/modules/mail/queue-mail.ts'
import { sendDue, startMailSender } from '../../../server/modules/mail/send-mail.ts'
import { mailTransport, type MailTransport, type OutgoingMail } from '../../../server/modules/mail/transports.ts'
import { aWorkplace, type Workplace } from '../../support/workplace.ts'
import { lastEntry } from '../people/read-back.ts'

const silent = pino({ level: 'silent' })
const link = `http://127.0.0.1:4870/links/${'s'.repeat(43)}`

async function queued(w: Workplace, count = 1): Promise<number[]> {
  const ids: number[] = []
  const em = w.orm.em.fork()
  for (let i = 0; i < count; i += 1) {
    const mail = queueMail(em, { to: `builder-${i}@dunlin.example`, subject: `Board ${i} flashed`, text: `Set it here:\n\n${link}\n`, secretLink: link, now: w.services.now() })!
    await em.flush()
    ids.push(mail.id)
  }
  return ids
}

const mailNow = (w: Workplace, id: number) => w.orm.em.fork().findOneOrFail(Mail, { id })

/** Keeps what it is given; fails as often as told. */
function recorder(failures = 0): MailTransport & { sent: OutgoingMail[] } {
  const sent: OutgoingMail[] = []
  let left = failures
  return {
    sent,
    async deliver(mail) {
      if (left > 0) {
        left -= 1
        throw new Error('the mail server is away')
      }
      sent.push(mail)
    },
    close: () => {},
  }
}

const folders: string[] = []
function aFolder() {
  const folder = mkdtempSync(join(tmpdir(), 'detent-mail-'))
  folders.push(folder)
  return folder
}
afterAll(() => folders.forEach((f) => rmSync(f, { recursive: true })))

/** A mail server on this machine that keeps what it receives. */
async function anSmtpServer(): Promise<{ url: string; received: string[]; close: () => Promise<void> }> {
  const received: string[] = []
  const server = new SMTPServer({
    disabledCommands: ['STARTTLS', 'AUTH'],
    onData(stream, session, done) {
      const to = session.envelope.rcptTo.map((r) => r.address).join()
      let text = `RCPT ${to}\n`
      stream.on('data', (part: Buffer) => (text += part.toString()))
      stream.on('end', () => {
        received.push(text)
        done()
      })
    },
  })
  await new Promise<void>((done) => server.listen(0, '127.0.0.1', done))
  const { port } = server.server.address() as AddressInfo
  return { url: `smtp://127.0.0.1:${port}`, received, close: () => new Promise((done) => server.close(() => done())) }
}

describe('queueing mail', () => {
  it('keeps a subject one header line, and refuses a link that masking would miss', async () => {
    const w = await aWorkplace()
    const em = w.orm.em.fork()
    const mail = queueMail(em, { to: 'builder@dunlin.example', subject: 'Change: knee\r\nBcc: all@dunlin.example', text: 'text', now: w.services.now() })!
    expect(mail.subject).toBe('Change: knee Bcc: all@dunlin.example')
    expect(() => queueMail(em, { to: 'builder@dunlin.example', subject: 'A', text: 'no link here', secretLink: link, now: w.services.now() })).toThrow('does not stand in the text')
  })
})

describe('sending what is due', () => {
  it('hands on the oldest first and marks each sent; in a real workplace the link is then forgotten', async () => {
    const w = await aWorkplace()
    const [first, second] = await queued(w, 2)
    const transport = recorder()
    expect(await sendDue(w.services, transport, silent)).toBe(2)
    expect(transport.sent.map((m) => m.id)).toEqual([first, second])
    expect(transport.sent[0].text).toContain(link)
    const mail = await mailNow(w, first)
    expect(mail).toMatchObject({ state: 'sent', attempts: 1, lastError: null, secretLink: null })
    expect(mail.sentAt).toEqual(w.services.now())
    expect(mail.text).not.toContain('ssss')
    expect(await sendDue(w.services, transport, silent)).toBe(0)
  })

  it('keeps it as sent in the demo', async () => {
    const w = await aWorkplace({ DETENT_MODE: 'demo' })
    const [id] = await queued(w)
    await sendDue(w.services, recorder(), silent)
    expect(await mailNow(w, id)).toMatchObject({ state: 'sent', secretLink: link, text: expect.stringContaining(link) })
  })

  it('tries again after longer and longer, then waits for an administrator', async () => {
    const w = await aWorkplace()
    const [id] = await queued(w)
    const transport = recorder(Infinity)
    let time = w.services.now().getTime()
    const waits: number[] = []
    for (let attempt = 1; attempt <= 8; attempt += 1) {
      expect(await sendDue(w.services, transport, silent)).toBe(1)
      expect(await sendDue(w.services, transport, silent)).toBe(0)
      const mail = await mailNow(w, id)
      expect(mail).toMatchObject({ attempts: attempt, state: attempt === 8 ? 'failed' : 'queued', lastError: 'the mail server is away' })
      waits.push((mail.nextAttemptAt.getTime() - time) / 1000)
      time = mail.nextAttemptAt.getTime()
      w.at(new Date(time))
    }
    expect(waits).toEqual([30, 60, 120, 240, 480, 960, 1920, 3600])
    w.at(new Date(time + 86_400_000))
    expect(await sendDue(w.services, transport, silent)).toBe(0)
    expect((await mailNow(w, id)).secretLink).toBe(link)
  })

  it('lets one that fails hold up no other', async () => {
    const w = await aWorkplace()
    const [first, second] = await queued(w, 2)
    const transport = recorder(1)
    await sendDue(w.services, transport, silent)
    expect((await mailNow(w, first)).state).toBe('queued')
    expect((await mailNow(w, second)).state).toBe('sent')
  })

  it('speaks SMTP', async () => {
    const smtp = await anSmtpServer()
    try {
      const w = await aWorkplace({ DETENT_SMTP_URL: smtp.url, DETENT_MAIL_FROM: 'Detent <detent@dunlin.example>' })
      const em = w.orm.em.fork()
      queueMail(em, { to: 'builder@dunlin.example', subject: 'Grüße vom Prüfstand', text: 'Zeile eins\n.\nZeile drei', now: w.services.now() })
      await em.flush()
      const transport = mailTransport(w.services.config)
      await sendDue(w.services, transport, silent)
      transport.close()
      expect((await mailNow(w, 1)).state).toBe('sent')
      expect(smtp.received).toHaveLength(1)
      const [message] = smtp.received
      expect(message).toMatch(/^RCPT builder@dunlin\.example\n/)
      expect(message).toContain('From: Detent <detent@dunlin.example>')
      expect(message).toMatch(/^Subject: =\?UTF-8\?Q\?Gr=C3=BC=C3=9Fe_vom_Pr=C3=BCfstand\?=/m)
      expect(message).toMatch(/^Message-ID: <mail-1-\d+@detent>/m)
    } finally {
      await smtp.close()
    }
  })

  it('keeps the mail when nobody answers at the SMTP address', async () => {
    const smtp = await anSmtpServer()
    await smtp.close()
    const w = await aWorkplace({ DETENT_SMTP_URL: smtp.url })
    const [id] = await queued(w)
    const transport = mailTransport(w.services.config)
    await sendDue(w.services, transport, silent)
    transport.close()
    expect(await mailNow(w, id)).toMatchObject({ state: 'queued', attempts: 1, lastError: expect.stringContaining('ECONNREFUSED') })
  })

  it('without SMTP writes it for the operator of the machine alone in a real workplace, and nowhere in the demo', async () => {
    for (const mode of ['workplace', 'demo']) {
      const folder = aFolder()
      const w = await aWorkplace({ DETENT_MODE: mode, DETENT_DATA: folder })
      const [id] = await queued(w)
      await sendDue(w.services, mailTransport(w.services.config), silent)
      expect((await mailNow(w, id)).state).toBe('sent')
      if (mode === 'demo') {
        expect(readdirSync(folder)).toEqual([])
        continue
      }
      const file = join(folder, 'mail', readdirSync(join(folder, 'mail'))[0])
      expect(statSync(file).mode & 0o777).toBe(0o600)
      expect(statSync(join(folder, 'mail')).mode & 0o777).toBe(0o700)
      expect(readFileSync(file, 'utf8')).toContain(link)
      expect(readFileSync(file, 'utf8')).toContain('To: builder-0@dunlin.example')
    }
  })
})

describe('the sender', () => {
  it('sends what is queued when woken, and nothing after it stopped', async () => {
    const w = await aWorkplace()
    let told = () => {}
    const arrived = () => new Promise<void>((done) => (told = done))
    const sent: number[] = []
    const transport: MailTransport = {
      async deliver(mail) {
        sent.push(mail.id)
        told()
      },
      close: () => {},
    }
    const first = arrived()
    const [one] = await queued(w)
    const sender = startMailSender(w.services, silent, transport)
    await first
    const second = arrived()
    const [two] = await queued(w)
    sender.wake()
    await second
    await sender.stop()
    await queued(w)
    sender.wake()
    expect(sent).toEqual([one, two])
    expect((await mailNow(w, two)).state).toBe('sent')
  })

  it('goes on with more than a round holds', async () => {
    const w = await aWorkplace()
    await queued(w, 45)
    let done = () => {}
    const all = new Promise<void>((resolve) => (done = resolve))
    let count = 0
    const sender = startMailSender(w.services, silent, { deliver: async () => void ((count += 1) === 45 && done()), close: () => {} })
    await all
    await sender.stop()
    expect(await w.orm.em.fork().count(Mail, { state: 'sent' })).toBe(45)
  })
})

describe('reading the mail queue', () => {
  it('masks single-use links in a real workplace, those of others in the text too', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    await supertest(w.app).post('/api/reset').send({ email: person.email }).expect(202)
    const [mail] = await w.orm.em.fork().find(Mail, {})
    const secret = mail.secretLink!.slice(mail.secretLink!.lastIndexOf('/') + 1)
    const admin = await w.as('administrator')
    const { body, text } = await admin.get('/api/mail').expect(200)
    expect(body).toMatchObject({ next: null, total: 1, mails: [{ to: person.email, person: 'Yuna Brandt', subject: 'Set a new Detent password', state: 'queued', attempts: 0, sentAt: null, lastError: null, may: { retry: { allowed: true } } }] })
    expect(text).not.toContain(secret)
    expect(text).not.toContain(secret.slice(0, 12))
    expect(body.mails[0].text).toContain('/links/(masked: for its receiver alone)')
    expect(Object.keys(body.mails[0])).not.toContain('secretLink')
    expect(masked({ text: `forwarded: ${link} end`, secretLink: null })).toBe('forwarded: http://127.0.0.1:4870/links/(masked: for its receiver alone) end')
    await w.signIn(person)
  })

  it('shows them in the demo, where nobody else receives them', async () => {
    const w = await aWorkplace({ DETENT_MODE: 'demo' })
    const person = await w.person('Yuna Brandt', [['observer', null]])
    await supertest(w.app).post('/api/reset').send({ email: person.email }).expect(202)
    const admin = await w.as('administrator')
    const { body } = await admin.get('/api/mail').expect(200)
    const secret = /\/links\/([\w-]{43})/.exec(body.mails[0].text as string)![1]
    await supertest(w.app).get(`/api/links/${secret}`).expect(200)
  })

  it('comes in pages, newest first', async () => {
    const w = await aWorkplace()
    const ids = await queued(w, 103)
    const admin = await w.as('administrator')
    const { body: first } = await admin.get('/api/mail').expect(200)
    expect(first.mails.map((m: { id: number }) => m.id)).toEqual([...ids].reverse().slice(0, 100))
    expect(first).toMatchObject({ next: ids[3], total: 103 })
    const { body: last } = await admin.get(`/api/mail?before=${first.next}`).expect(200)
    expect(last.mails.map((m: { id: number }) => m.id)).toEqual([ids[2], ids[1], ids[0]])
    expect(last.next).toBeNull()
    for (const wrong of ['x', '-1', '1.5', '0', '1e3']) await admin.get(`/api/mail?before=${wrong}`).expect(400)
  })

  it.each(['observer', 'controls engineer', 'peer reviewer', 'release manager', 'builder'] as const)('is not for a %s', async (role) => {
    const w = await aWorkplace()
    const [id] = await queued(w)
    const person = await w.as(role)
    await person.get('/api/mail').expect(403)
    await person.post(`/api/mail/${id}/retry`).expect(403)
  })
})

describe('sending a mail again', () => {
  it('puts a failed one back at once, and writes it down without its text', async () => {
    const w = await aWorkplace()
    const [id] = await queued(w)
    const em = w.orm.em.fork()
    Object.assign(await em.findOneOrFail(Mail, { id }), { state: 'failed', attempts: 8, lastError: 'away', nextAttemptAt: new Date('2030-01-01') })
    await em.flush()
    const admin = await w.as('administrator')
    const { body } = await admin.post(`/api/mail/${id}/retry`).expect(200)
    expect(body).toMatchObject({ id, state: 'queued', attempts: 0 })
    const entry = await lastEntry(w)
    expect(entry).toMatchObject({ act: 'mail sent again', personId: admin.me.id, details: { mail: id, subject: 'Board 0 flashed' } })
    expect(JSON.stringify(entry)).not.toContain('ssss')
    expect(await sendDue(w.services, recorder(), silent)).toBe(1)
  })

  it('refuses one that was sent, and finds none that is not there', async () => {
    const w = await aWorkplace()
    const [id] = await queued(w)
    await sendDue(w.services, recorder(), silent)
    const admin = await w.as('administrator')
    expect((await admin.post(`/api/mail/${id}/retry`).expect(409)).body.type).toBe('/problems/wrong-state')
    for (const none of ['999', 'x', '0']) await admin.post(`/api/mail/${none}/retry`).expect(404)
  })
})
