import { beforeAll, describe, expect, it } from 'vitest'
import type { ConcessionRequest } from '../../../shared/contract/changes.ts'
import { defaultPolicy } from '../../../shared/contract/policy.ts'
import type { DeskTask, DeskView } from '../../../shared/contract/desk.ts'
import { Mail } from '../../../server/modules/mail/mail.entity.ts'
import { queueMail } from '../../../server/modules/mail/queue-mail.ts'
import { twoKnees } from '../../support/a-walker-set.ts'
import { aFirmware } from '../../support/a-firmware.ts'
import { aRelease } from '../../support/a-release.ts'
import { aDraft, aWalker, hingeSchema, reviewed, submitted, type Walker } from '../../support/a-walker.ts'
import type { SignedIn } from '../../support/workplace.ts'
import { kneeLog, sendLog } from '../evidence/a-log.ts'

const desk = async (person: SignedIn) => (await person.get('/api/desk').expect(200)).body as DeskView
const kinds = async (person: SignedIn) => (await desk(person)).tasks.map((t) => t.kind)
const one = async <K extends DeskTask['kind']>(person: SignedIn, kind: K) => (await desk(person)).tasks.filter((t): t is Extract<DeskTask, { kind: K }> => t.kind === kind)

describe('what waits on a desk, by role', () => {
  let w: Walker
  let administrator: SignedIn
  beforeAll(async () => {
    w = await aWalker()
    administrator = await w.as('administrator')
  })

  it('is nothing for somebody who only reads, and for a builder, whose boards stand apart', async () => {
    expect(await desk(w.observer)).toEqual({ tasks: [], signed: [] })
    expect(await kinds(w.builder)).toEqual([])
  })

  it('is a proposed policy, for release managers who did not propose it, until it is signed', async () => {
    await administrator.post('/api/machines/dunlin/policy', { content: { ...defaultPolicy, peerReviews: 2 }, reason: 'Agreed on Monday.' }).expect(201)
    expect(await one(w.manager, 'policy')).toMatchObject([{ machine: 'dunlin', why: 'Agreed on Monday.', title: expect.stringContaining('Policy of Dunlin') as string }])
    for (const person of [w.engineer, w.reviewer, administrator]) expect(await one(person, 'policy')).toEqual([])
  })

  it('is a drafted firmware version, for release managers who did not write in it', async () => {
    const author = await w.person('Writes Firmware', [['controls engineer', null], ['release manager', null]])
    await aFirmware(w, { schema: hingeSchema(), version: '2.2.0', state: 'draft', uploadedBy: author })
    expect(await one(await w.signIn(author), 'firmware')).toEqual([])
    expect(await one(w.manager, 'firmware')).toMatchObject([{ line: 'hinge', version: '2.2.0' }])
    for (const person of [w.engineer, w.reviewer, w.builder]) expect(await one(person, 'firmware')).toEqual([])
  })

  it('is a signing right to confirm, for signers, never for its holder', async () => {
    const held = await w.person('Newly Granted', [['peer reviewer', 'dunlin']], { confirmed: false })
    expect(await one(w.manager, 'signing right')).toMatchObject([{ person: held.id }])
    expect(await one(w.engineer, 'signing right')).toEqual([])
    expect(await one(await w.signIn(held), 'signing right')).toEqual([])
  })

  it('is mail that could not be sent, for administrators, oldest told', async () => {
    const em = w.orm.em.fork()
    for (const subject of ['First', 'Second']) queueMail(em, { to: 'gone@dunlin.example', subject, text: 'x', now: w.services.now() })
    await em.flush()
    await em.nativeUpdate(Mail, { to: 'gone@dunlin.example' }, { state: 'failed', lastError: 'connection refused' })
    expect(await one(administrator, 'mail')).toMatchObject([{ title: '2 mails could not be sent', why: 'connection refused' }])
    expect(await one(w.manager, 'mail')).toEqual([])
  })

  it('is a log whose columns are not named, for who uploaded it alone', async () => {
    const key = await aDraft(w)
    await sendLog(w.engineer, `/api/changes/${key}/joints/l1-knee/evidence`, kneeLog(), 'unnamed.csv').expect(201)
    expect(await one(w.engineer, 'log')).toMatchObject([{ machine: 'dunlin', evidence: 1, title: 'unnamed.csv' }])
    expect(await one(w.other, 'log')).toEqual([])
    await w.engineer.post('/api/machines/dunlin/evidence/1/remove').expect(200)
    expect(await one(w.engineer, 'log')).toEqual([])
    await submitted(w, key)
    expect((await desk(w.reviewer)).signed).toEqual([])
    await reviewed(w, key)
    // what one has signed waits for others, and no longer for oneself
    expect((await desk(w.reviewer)).signed).toEqual([key])
    expect((await desk(w.manager)).signed).toEqual([])
  })

  it('stands oldest first', async () => {
    w.at('2026-03-02T11:00:00Z')
    await aFirmware(w, { schema: hingeSchema(), version: '2.3.0', state: 'draft' })
    const since = (await desk(w.manager)).tasks.map((t) => t.since)
    expect(since.length).toBeGreaterThan(2)
    expect(since).toEqual([...since].sort())
  })
})

describe('a concession on a desk', () => {
  it('shows from a fortnight before its end, and when it is used up, to those who can renew it', async () => {
    const w = await aWalker()
    const concession = (over: Partial<ConcessionRequest>): ConcessionRequest => ({ finding: 'x', characteristic: 'phase margin', limit: '45°', reason: 'Agreed.', until: '2026-06-30', count: null, ...over })
    await aRelease(w, { version: '1.0.0', set: twoKnees(), concessions: [concession({}), concession({ characteristic: 'bus watchdog', until: '2026-07-31' })] })
    expect(await one(w.engineer, 'concession')).toEqual([])
    w.at('2026-06-17T09:00:00Z')
    expect(await one(await w.as([['controls engineer', 'dunlin']]), 'concession')).toMatchObject([{ machine: 'dunlin', release: '1.0.0', title: 'Concession for phase margin of Dunlin 1.0.0', why: expect.stringContaining('ends on 2026-06-30') as string }])
    w.at('2026-07-01T09:00:00Z')
    expect((await one(await w.as([['release manager', 'dunlin']]), 'concession'))[0].why).toContain('ended on 2026-06-30')
    expect(await one(await w.as([['builder', 'dunlin']]), 'concession')).toEqual([])
  })
})
