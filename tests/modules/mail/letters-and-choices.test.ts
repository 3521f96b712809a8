import type { AddressInfo } from 'node:net'
import fc from 'fast-check'
import { pino } from 'pino'
import { SMTPServer } from 'smtp-server'
import { beforeAll, describe, expect, it } from 'vitest'
import { digestHour } from '../../../shared/contract/mail.ts'
import { gatherDigests, nextDigest } from '../../../server/modules/mail/digest.ts'
import { letterHtml } from '../../../server/modules/mail/letter-html.ts'
import { Mail } from '../../../server/modules/mail/mail.entity.ts'
import { queueMail } from '../../../server/modules/mail/queue-mail.ts'
import { sendDue } from '../../../server/modules/mail/send-mail.ts'
import { mailTransport } from '../../../server/modules/mail/transports.ts'
import { Person } from '../../../server/modules/people/person.entity.ts'
import { aDraft, aWalker, etag, read, reviewed, submitted, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aWorkplace, type Workplace } from '../../support/workplace.ts'

const silent = pino({ level: 'silent' })
const mails = (w: Workplace, where: object = {}) => w.orm.em.fork().find(Mail, where, { orderBy: { id: 'asc' } })

describe('a letter in HTML', () => {
  it('says what its text says, with paragraphs, lists and addresses that lead somewhere', () => {
    const html = letterHtml('Withdrawn: Dunlin 1.2.0', 'Hedda withdrew it.\nIt must not run.\n\n  H-0258 at R3 yaw\n  H-0259 at R3 hip\n\nRead it at http://127.0.0.1:4870/changes/dunlin-3/review.\n')
    expect(html).toContain('<p style="margin:0 0 14px">Hedda withdrew it.<br>It must not run.</p>')
    expect(html).toContain('<li>H-0258 at R3 yaw</li><li>H-0259 at R3 hip</li>')
    expect(html).toContain('<a href="http://127.0.0.1:4870/changes/dunlin-3/review" style="color:#4a5f7a">http://127.0.0.1:4870/changes/dunlin-3/review</a>.')
  })

  it('holds no element, attribute or address that people wrote into it', () => {
    const written = `<img src=x onerror=alert(1)> "quoted" & 'single' https://x.example/"onmouseover="a javascript:alert(1)`
    const html = letterHtml(written, written)
    expect(html).not.toMatch(/<img|<[^>]*\son\w+=/)
    expect(html).not.toContain('href="javascript:')
    expect(html).toContain('&lt;img src=x onerror=alert(1)&gt; &quot;quoted&quot; &amp; &#39;single&#39;')
  })

  it('never lets a tag through, whatever is written', () => {
    const own = /<\/?(?:!doctype html|html lang="en"|html|head|meta charset="utf-8"|title|body|div|h1|p|br|ul|li|hr|a)(?: (?:style|href)="[^"<>]*")*>/g
    fc.assert(fc.property(fc.string(), fc.string(), (subject, text) => !/[<>]/.test(letterHtml(subject, text).replace(own, ''))), { numRuns: 500 })
  })
})

describe('mail as people choose it', () => {
  let w: Workplace
  let person: Person
  const queue = async (topic: 'return' | 'release' | 'withdrawal' | 'account', subject: string) => {
    const em = w.orm.em.fork()
    const mail = queueMail(em, { person: await em.findOneOrFail(Person, { id: person.id }), topic, subject, text: `${subject} <told>.\n`, now: w.services.now() })
    await em.flush()
    return mail
  }
  beforeAll(async () => {
    w = await aWorkplace()
    person = await w.person('Wren Halloran', [['controls engineer', null]])
  })

  it('is at once for every topic, until somebody chooses otherwise; the choice stands in the ledger', async () => {
    const me = await w.signIn(person)
    const usual = (await me.get('/api/me/mail').expect(200)).body
    expect(new Set(Object.values(usual))).toEqual(new Set(['at once']))
    const chosen = (await me.put('/api/me/mail', { return: 'daily digest', release: 'not' }).expect(200)).body
    expect(chosen).toEqual({ ...usual, return: 'daily digest', release: 'not' })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'mail chosen', subject: { person: 'Wren Halloran' }, details: { return: 'daily digest', release: 'not' } })
    expect((await me.put('/api/me/mail', { withdrawal: 'not' }).expect(400)).body.type).toBe('/problems/invalid-request')
    await me.put('/api/me/mail', { account: 'not' }).expect(400)
    await me.put('/api/me/mail', { return: 'never' }).expect(400)
  })

  it('holds, drops or sends by it; what concerns the account or a withdrawn release never waits', async () => {
    expect(await queue('release', 'Released')).toBeNull()
    await queue('return', 'Returned one')
    await queue('return', 'Returned two')
    await queue('withdrawal', 'Withdrawn')
    await queue('account', 'Password')
    expect((await mails(w)).map((m) => [m.subject, m.state])).toEqual([['Returned one', 'held'], ['Returned two', 'held'], ['Withdrawn', 'queued'], ['Password', 'queued']])
    expect(await gatherDigests(w.services)).toBe(0)
  })

  it('puts what was held into one mail at the hour of the digest', async () => {
    const due = nextDigest(w.services.now())
    expect([due.getHours(), due.getMinutes()]).toEqual([digestHour, 0])
    w.at(due)
    expect(await gatherDigests(w.services)).toBe(1)
    const [digest] = await mails(w, { topic: 'digest' })
    expect(digest).toMatchObject({ state: 'queued', to: person.email, subject: 'Detent: 2 notices since your last digest' })
    expect(digest.text).toMatch(/Returned one <told>\.[^]*----[^]*Returned two <told>\.[^]*account page/)
    expect((await mails(w, { state: 'gathered' })).map((m) => m.subject)).toEqual(['Returned one', 'Returned two'])
    expect(await gatherDigests(w.services)).toBe(0)
    const admin = await w.as('administrator')
    expect((await admin.post(`/api/mail/${(await mails(w, { state: 'gathered' }))[0].id}/retry`).expect(409)).body.detail).toContain('in a digest')
  })

  it('reaches a mail server in both forms, escaped in the one', async () => {
    const received: string[] = []
    const server = new SMTPServer({
      disabledCommands: ['STARTTLS', 'AUTH'],
      onData(stream, _session, done) {
        let text = ''
        stream.on('data', (part: Buffer) => (text += part.toString()))
        stream.on('end', () => {
          received.push(text)
          done()
        })
      },
    })
    await new Promise<void>((done) => server.listen(0, '127.0.0.1', done))
    const { port } = server.server.address() as AddressInfo
    const transport = mailTransport({ ...w.services.config, smtpUrl: `smtp://127.0.0.1:${port}` })
    await sendDue(w.services, transport, silent)
    transport.close()
    await new Promise<void>((done) => server.close(() => done()))
    // quoted-printable (RFC 2045): a line's soft end, and a byte by its number
    const digest = received.find((m) => m.includes('2 notices'))!.replaceAll('=\r\n', '').replaceAll('=3D', '=')
    expect(digest).toContain('Content-Type: multipart/alternative')
    expect(digest).toMatch(/Content-Type: text\/plain[^]*Returned one <told>\./)
    expect(digest).toMatch(/Content-Type: text\/html[^]*Returned one &lt;told&gt;\./)
    expect((await mails(w, { state: 'sent' })).length).toBe(3)
  })

  it('tells a person disabled meanwhile of nothing more', async () => {
    await queue('return', 'Returned three')
    const em = w.orm.em.fork()
    await em.nativeUpdate(Person, { id: person.id }, { disabledAt: w.services.now() })
    w.at(nextDigest(w.services.now()))
    await gatherDigests(w.services)
    expect(await mails(w, { topic: 'digest', state: 'queued' })).toEqual([])
  })
})

describe('whose signature a change waits for', () => {
  let w: Walker
  const waiting = async () => (await mails(w, { topic: 'waiting' })).map((m) => [m.to, m.subject])
  beforeAll(async () => {
    w = await aWalker()
  })

  it('is mailed: the peer reviewers at its submission, the release managers once it is approved; nobody who wrote in it', async () => {
    const key = await aDraft(w)
    const both = await w.person('Both Hats', [['peer reviewer', 'dunlin'], ['controls engineer', 'dunlin']])
    await w.engineer.post(`/api/changes/${key}/writers`, { person: both.id }).set('If-Match', etag(await read(w.engineer, key)))
    await w.person('Unconfirmed', [['peer reviewer', 'dunlin']], { confirmed: false })
    await submitted(w, key)
    expect(await waiting()).toEqual([[w.reviewer.me.email, `To read and sign: Dunlin 1, First numbers`]])
    const [mail] = await mails(w, { topic: 'waiting' })
    expect(mail.text).toContain(`/changes/${key}/review`)
    await reviewed(w, key)
    const later = (await waiting()).slice(1)
    expect(later).toContainEqual([w.manager.me.email, 'To release: Dunlin 1, First numbers'])
    expect(new Set(later.map(([, subject]) => subject))).toEqual(new Set(['To release: Dunlin 1, First numbers']))
    expect(later.map(([to]) => to)).not.toContain(both.email)
  })
})
