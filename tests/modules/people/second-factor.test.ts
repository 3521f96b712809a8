import { randomBytes } from 'node:crypto'
import { Secret, TOTP } from 'otpauth'
import supertest from 'supertest'
import { describe, expect, it } from 'vitest'
import { Receipt } from '../../../server/http/receipt.entity.ts'
import { LedgerEntry } from '../../../server/modules/ledger/ledger-entry.entity.ts'
import type { Person } from '../../../server/modules/people/person.entity.ts'
import { RecoveryCode } from '../../../server/modules/people/second-factor/recovery-code.entity.ts'
import { sealsOf } from '../../../server/modules/people/second-factor/seals.ts'
import { SessionRecord } from '../../../server/modules/people/session.entity.ts'
import { aWorkplace, password, type SignedIn, type Workplace } from '../../support/workplace.ts'
import { defaultPolicy } from '../../../shared/contract/policy.ts'
import { lastEntry, machines, mailsTo, personNow } from './read-back.ts'

/** An authenticator app, made by the same library; its codes are held to RFC 6238 in totp.test.ts. */
const codeOf = (secret: string, w: Workplace) => TOTP.generate({ secret: Secret.fromBase32(secret.replaceAll(' ', '')), timestamp: w.services.now().getTime() })

const start = Date.parse('2026-03-02T09:00:00Z')
/** Moves the clock to the n-th step of 30 s after the start, so that a code never used before is shown. */
const step = (w: Workplace, n: number) => w.at(new Date(start + n * 30_000))

async function setUp(w: Workplace, here: SignedIn): Promise<{ secret: string; codes: string[]; again: SignedIn }> {
  const { secret } = (await here.post('/api/account/second-factor', { password }).expect(200)).body as { secret: string }
  const { recoveryCodes } = (await here.post('/api/account/second-factor/confirm', { code: codeOf(secret, w) }).expect(200)).body as { recoveryCodes: string[] }
  return { secret, codes: recoveryCodes, again: here }
}

/** The first step of signing in; the agent keeps the cookie for the second. */
async function passwordStep(w: Workplace, person: Pick<Person, 'email'>) {
  const agent = supertest.agent(w.app)
  const { body } = await agent.post('/api/session').send({ email: person.email, password }).expect(200)
  return { agent, body: body as { signedIn: boolean } }
}

const aSigner = async (w: Workplace) => {
  const person = await w.person('Rafiq Sandoval', [['peer reviewer', null]])
  return { person, here: await w.signIn(person) }
}

describe('setting up a second factor', () => {
  it('takes the password, then a code; shows recovery codes once; mails and writes it down', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const there = await w.signIn(person)
    const wrong = await here.post('/api/account/second-factor', { password: 'not my password' }).expect(403)
    expect(wrong.body).toMatchObject({ type: '/problems/wrong-password', errors: [{ pointer: '/password' }] })
    const begun = (await here.post('/api/account/second-factor', { password }).expect(200)).body as { secret: string; picture: string }
    expect(begun.secret).toMatch(/^([A-Z2-7]{4} ){7}[A-Z2-7]{4}$/)
    expect(begun.picture).toMatch(/^<svg /)
    expect((await here.get('/api/me')).body.secondFactor).toMatchObject({ since: null })
    const refused = await here.post('/api/account/second-factor/confirm', { code: '000000' }).expect(403)
    expect(refused.body).toMatchObject({ type: '/problems/wrong-code', errors: [{ pointer: '/code', detail: 'is wrong' }] })
    const { recoveryCodes } = (await here.post('/api/account/second-factor/confirm', { code: codeOf(begun.secret, w) }).set('Idempotency-Key', 'set-up-once').expect(200)).body as { recoveryCodes: string[] }
    expect(recoveryCodes).toHaveLength(10)
    for (const code of recoveryCodes) expect(code).toMatch(/^([0-9A-HJKMNP-TV-Z]{4}-){5}[0-9A-HJKMNP-TV-Z]{4}$/)
    expect((await here.get('/api/me').expect(200)).body.secondFactor).toMatchObject({ since: w.services.now().toISOString(), recoveryCodesLeft: 10 })
    await there.get('/api/me').expect(401)
    expect(await lastEntry(w)).toMatchObject({ act: 'second factor set up', personId: person.id, details: { sessionsEnded: 1 } })
    expect((await mailsTo(w, person.email))[0].subject).toBe('A second factor was set up in Detent')
  })

  it('keeps neither secret nor codes in the clear: not in rows, sessions, receipts, ledger or mail', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const begun = (await here.post('/api/account/second-factor', { password })).body as { secret: string }
    const em = w.orm.em.fork()
    const during = JSON.stringify(await em.find(SessionRecord, {}))
    const { recoveryCodes } = (await here.post('/api/account/second-factor/confirm', { code: codeOf(begun.secret, w) }).set('Idempotency-Key', 'set-up-once')).body as { recoveryCodes: string[] }
    const kept = [during]
    for (const table of ['person', 'recovery_code', 'session', 'receipt', 'ledger_entry', 'mail']) kept.push(JSON.stringify(await em.getConnection().execute(`select * from ${table}`)))
    const base32 = begun.secret.replaceAll(' ', '')
    for (const secret of [base32, Buffer.from(Secret.fromBase32(base32).bytes).toString('base64'), Buffer.from(Secret.fromBase32(base32).bytes).toString('hex'), ...recoveryCodes, ...recoveryCodes.map((c) => c.replaceAll('-', ''))])
      for (const text of kept) expect(text.toUpperCase()).not.toContain(secret.toUpperCase())
    expect(await em.count(RecoveryCode, { person })).toBe(10)
    expect(await em.count(Receipt, { key: 'set-up-once' })).toBe(1)
  })

  it('renews the session, and answers a repeat without the codes', async () => {
    const w = await aWorkplace()
    const { here } = await aSigner(w)
    const before = (await w.orm.em.fork().find(SessionRecord, {})).map((s) => s.idHash)
    const { secret } = (await here.post('/api/account/second-factor', { password })).body as { secret: string }
    const confirm = () => here.post('/api/account/second-factor/confirm', { code: codeOf(secret, w) }).set('Idempotency-Key', 'set-up-once').expect(200)
    await confirm()
    expect((await confirm()).body).toEqual({ recoveryCodes: null })
    const after = (await w.orm.em.fork().find(SessionRecord, {})).map((s) => s.idHash)
    expect(after).toHaveLength(1)
    expect(before).not.toContain(after[0])
  })

  it('is not done a second time, nor without a beginning', async () => {
    const w = await aWorkplace()
    const { here } = await aSigner(w)
    await here.post('/api/account/second-factor/confirm', { code: '123456' }).expect(409)
    await setUp(w, here)
    await here.post('/api/account/second-factor', { password }).expect(409)
  })
})

describe('signing in with a second factor', () => {
  it('asks for the code after the password; the password alone opens nothing', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { secret } = await setUp(w, here)
    step(w, 1)
    const { agent, body } = await passwordStep(w, person)
    expect(body).toEqual({ signedIn: false })
    await agent.get('/api/me').expect(401)
    await agent.get('/api/machines').expect(401)
    const wrong = await agent.post('/api/session/code').send({ code: '000000' }).expect(403)
    expect(wrong.body.type).toBe('/problems/wrong-code')
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', personId: person.id, details: { asked: 'sign in with a second factor', refusal: 'wrong-code' } })
    const code = codeOf(secret, w)
    expect((await agent.post('/api/session/code').send({ code: `${code.slice(0, 3)} ${code.slice(3)}` }).expect(200)).body).toEqual({ signedIn: true })
    expect((await agent.get('/api/me').expect(200)).body.token).toMatch(/^[\w-]{32}$/)
  })

  it('takes no code twice, nor an earlier one after a later one', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { secret } = await setUp(w, here)
    const first = await passwordStep(w, person)
    const used = await first.agent.post('/api/session/code').send({ code: codeOf(secret, w) }).expect(403)
    expect(used.body.errors).toEqual([{ pointer: '/code', detail: 'was used already' }])
    step(w, 3)
    const earlier = codeOf(secret, w)
    step(w, 4)
    await first.agent.post('/api/session/code').send({ code: codeOf(secret, w) }).expect(200)
    const second = await passwordStep(w, person)
    await second.agent.post('/api/session/code').send({ code: earlier }).expect(403)
  })

  it('lets one of two at once have it', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { secret } = await setUp(w, here)
    step(w, 1)
    const tries = [await passwordStep(w, person), await passwordStep(w, person)]
    const answers = await Promise.all(tries.map(({ agent }) => agent.post('/api/session/code').send({ code: codeOf(secret, w) })))
    expect(answers.map((a) => a.status).sort()).toEqual([200, 403])
  })

  it('takes codes of the step before and after, and of no other', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { secret } = await setUp(w, here)
    for (const [made, entered, status] of [[10, 12, 403], [20, 18, 403], [30, 31, 200], [41, 40, 200]] as const) {
      step(w, made)
      const code = codeOf(secret, w)
      step(w, entered)
      const { agent } = await passwordStep(w, person)
      expect((await agent.post('/api/session/code').send({ code })).status, `made at ${made}, entered at ${entered}`).toBe(status)
    }
  })

  it('takes a recovery code once, tells by mail how many are left, and writes it down', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { codes } = await setUp(w, here)
    const first = await passwordStep(w, person)
    await first.agent.post('/api/session/code').send({ code: codes[3].toLowerCase().replaceAll('-', ' ') }).expect(200)
    expect((await first.agent.get('/api/me')).body.secondFactor.recoveryCodesLeft).toBe(9)
    expect((await mailsTo(w, person.email))[0]).toMatchObject({ subject: 'A recovery code was used in Detent', text: expect.stringContaining('9 are left') })
    expect(await lastEntry(w)).toMatchObject({ act: 'recovery code used', personId: person.id, details: { left: 9 } })
    const second = await passwordStep(w, person)
    await second.agent.post('/api/session/code').send({ code: codes[3] }).expect(403)
  })

  it("takes nobody else's code, secret or recovery code", async () => {
    const w = await aWorkplace()
    const one = await aSigner(w)
    const other = await w.person('Hedda Lindqvist', [['release manager', null]])
    const mine = await setUp(w, one.here)
    await setUp(w, await w.signIn(other))
    step(w, 1)
    const { agent } = await passwordStep(w, other)
    await agent.post('/api/session/code').send({ code: codeOf(mine.secret, w) }).expect(403)
    await agent.post('/api/session/code').send({ code: mine.codes[0] }).expect(403)
    // a sealed secret moved to another row does not open there
    await w.orm.em.getConnection().execute('update person set second_factor = (select second_factor from person where id = ?) where id = ?', [one.person.id, other.id])
    await agent.post('/api/session/code').send({ code: codeOf(mine.secret, w) }).expect(409)
  })

  it('awaits the code for five minutes, of a person who may still sign in', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { secret } = await setUp(w, here)
    await supertest(w.app).post('/api/session/code').send({ code: '123456' }).expect(401)
    const late = await passwordStep(w, person)
    step(w, 11)
    await late.agent.post('/api/session/code').send({ code: codeOf(secret, w) }).expect(401)
    const disabled = await passwordStep(w, person)
    const admin = await w.as('administrator')
    await admin.post(`/api/people/${person.id}/disable`).expect(200)
    await disabled.agent.post('/api/session/code').send({ code: codeOf(secret, w) }).expect(401)
  })

  it('stops guessing after ten wrong codes from wherever they come, and lets others sign in', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { secret } = await setUp(w, here)
    const other = await w.person('Yuna Brandt', [['observer', null]])
    step(w, 1)
    for (let i = 0; i < 10; i += 1) await (await passwordStep(w, person)).agent.post('/api/session/code').send({ code: '000000' }).expect(403)
    const { agent } = await passwordStep(w, person)
    const { headers } = await agent.post('/api/session/code').send({ code: codeOf(secret, w) }).expect(429)
    expect(Number(headers['retry-after'])).toBeGreaterThan(0)
    await w.signIn(other)
  })

  it('tells who has lost the key file to use a recovery code, which needs none', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { secret, codes } = await setUp(w, here)
    step(w, 1)
    const { agent } = await passwordStep(w, person)
    Object.assign(w.services.seals, sealsOf(randomBytes(32)))
    expect((await agent.post('/api/session/code').send({ code: codeOf(secret, w) }).expect(409)).body.detail).toContain('recovery code')
    await agent.post('/api/session/code').send({ code: codes[0] }).expect(200)
  })
})

describe('removing and renewing', () => {
  it('removes it by password and code, tells by mail, ends other sessions and the recovery codes', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { secret, codes } = await setUp(w, here)
    step(w, 1)
    const there = await passwordStep(w, person)
    await there.agent.post('/api/session/code').send({ code: codes[0] }).expect(200)
    await here.post('/api/account/second-factor/remove', { password: 'not my password', code: codeOf(secret, w) }).expect(403)
    await here.post('/api/account/second-factor/remove', { password, code: '000000' }).expect(403)
    await here.post('/api/account/second-factor/remove', { password, code: codeOf(secret, w) }).expect(200)
    await there.agent.get('/api/me').expect(401)
    expect((await here.get('/api/me').expect(200)).body.secondFactor).toMatchObject({ since: null, recoveryCodesLeft: 0 })
    expect(await w.orm.em.fork().count(RecoveryCode)).toBe(0)
    expect((await mailsTo(w, person.email))[0].subject).toBe('Your second factor was removed in Detent')
    expect(await lastEntry(w)).toMatchObject({ act: 'second factor removed', personId: person.id, details: { sessionsEnded: 1 } })
    expect((await passwordStep(w, person)).body).toEqual({ signedIn: true })
  })

  it('makes new recovery codes by password and code; the old ones end', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    const { secret, codes } = await setUp(w, here)
    step(w, 1)
    await here.post('/api/account/recovery-codes', { password, code: '000000' }).expect(403)
    const fresh = (await here.post('/api/account/recovery-codes', { password, code: codeOf(secret, w) }).expect(200)).body.recoveryCodes as string[]
    expect(fresh).toHaveLength(10)
    const { agent } = await passwordStep(w, person)
    await agent.post('/api/session/code').send({ code: codes[1] }).expect(403)
    await agent.post('/api/session/code').send({ code: fresh[1] }).expect(200)
    expect((await mailsTo(w, person.email)).map((m) => m.subject)).toContain('New recovery codes in Detent')
  })

  it('counts wrong passwords and codes of a session: after ten it asks to wait', async () => {
    const w = await aWorkplace()
    const { here } = await aSigner(w)
    for (let i = 0; i < 10; i += 1) await here.post('/api/account/second-factor', { password: 'a guess at the password' }).expect(403)
    const { headers, body } = await here.post('/api/account/second-factor', { password }).expect(429)
    expect(body.type).toBe('/problems/too-many-requests')
    expect(Number(headers['retry-after'])).toBe(900)
    w.at('2026-03-02T09:15:00Z')
    await here.post('/api/account/second-factor', { password }).expect(200)
  })
})

describe("a reset of somebody's second factor", () => {
  const aKeeper = (w: Workplace, roles: Parameters<Workplace['as']>[0] = 'administrator') => w.as(roles)

  it('takes it away, ends sessions, mails, writes it down, and holds signatures until another signer confirms', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    await setUp(w, here)
    const admin = await aKeeper(w)
    const { body } = await admin.post(`/api/people/${person.id}/second-factor/reset`).expect(200)
    expect(body).toMatchObject({ secondFactor: false, signingHold: 'second factor reset', may: { resetSecondFactor: { allowed: false } } })
    await here.get('/api/me').expect(401)
    expect(await lastEntry(w)).toMatchObject({ act: 'second factor reset', personId: admin.me.id, subject: { person: 'Rafiq Sandoval' }, details: { signingHold: 'second factor reset', sessionsEnded: 1 } })
    expect((await mailsTo(w, person.email))[0]).toMatchObject({ subject: 'Your second factor was reset in Detent', text: expect.stringContaining(admin.me.name) })
    const again = await w.signIn(person)
    expect(again.me.acts['*']).not.toContain('sign peer review')
    const hedda = await w.as('release manager')
    await hedda.post(`/api/people/${person.id}/confirm-signing`).expect(200)
    expect((await again.get('/api/me')).body.acts['*']).toContain('sign peer review')
    expect((await personNow(w, person.id)).signingHeldBy).toBeNull()
  })

  it('is not confirmed by the administrator who did it, though they sign too', async () => {
    const w = await aWorkplace()
    const { person, here } = await aSigner(w)
    await setUp(w, here)
    const both = await aKeeper(w, [['administrator', null], ['release manager', null]])
    await both.post(`/api/people/${person.id}/second-factor/reset`).expect(200)
    expect((await both.post(`/api/people/${person.id}/confirm-signing`).expect(403)).body.detail).toContain('You asked for the reset')
  })

  it('is no way round the own one, nor for who keeps no people, and there must be one', async () => {
    const w = await aWorkplace()
    const admin = await aKeeper(w)
    await setUp(w, admin)
    expect((await admin.post(`/api/people/${admin.me.id}/second-factor/reset`).expect(403)).body.detail).toContain('Nobody resets their own')
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', personId: admin.me.id })
    const yuna = await w.as('observer')
    await yuna.post(`/api/people/${admin.me.id}/second-factor/reset`).expect(403)
    await admin.post(`/api/people/${yuna.me.id}/second-factor/reset`).expect(409)
  })
})

describe('where signing roles need one', () => {
  const strict = () => aWorkplace({ DETENT_SECOND_FACTOR: 'signers' })

  it('is the default of a real workplace, and not of the demo', async () => {
    const { readConfig } = await import('../../../server/config.ts')
    expect(readConfig({ DETENT_MODE: 'workplace' }).secondFactor).toBe('signers')
    expect(readConfig({ DETENT_MODE: 'demo' }).secondFactor).toBe('optional')
    expect(() => readConfig({ DETENT_SECOND_FACTOR: 'never' })).toThrow('it takes optional or signers or signatures')
  })

  it('lets a signer in without it, tells them, and lets them sign nothing until it is set up', async () => {
    const w = await strict()
    const { here } = await aSigner(w)
    expect(here.me.secondFactor).toMatchObject({ missing: true, rule: 'signers' })
    expect(here.me.acts['*']).toContain('comment')
    expect(here.me.acts['*']).not.toContain('sign peer review')
    await setUp(w, here)
    const me = (await here.get('/api/me')).body
    expect(me.secondFactor).toMatchObject({ missing: false })
    expect(me.acts['*']).toContain('sign peer review')
  })

  it('asks nothing of who signs nothing', async () => {
    const w = await strict()
    const mirela = await w.as('controls engineer')
    expect(mirela.me.secondFactor).toMatchObject({ missing: false })
    expect(mirela.me.acts['*']).toContain('draft changes')
  })

  it('confirms nobody who has none, by nobody who has none', async () => {
    const w = await strict()
    const hedda = await w.as('release manager')
    const fresh = await w.person('Ingunn Veblen', [['peer reviewer', null]], { confirmed: false })
    const path = `/api/people/${fresh.id}/confirm-signing`
    expect((await hedda.post(path).expect(403)).body.detail).toContain('Your own signing role waits until you set up a second factor')
    await setUp(w, hedda)
    expect((await hedda.post(path).expect(409)).body.detail).toContain('has not set up a second factor yet')
    await setUp(w, await w.signIn(fresh))
    await hedda.post(path).expect(200)
    expect((await personNow(w, fresh.id)).secondFactorAt).not.toBeNull()
  })
})

describe('where each signature asks for a code', () => {
  const path = '/api/machines/dunlin/policy'

  it('signs nothing until one was entered in the session, and again after five minutes', async () => {
    const w = await aWorkplace({ DETENT_SECOND_FACTOR: 'signatures' })
    await machines(w)
    const admin = await w.as('administrator')
    const hedda = await w.as('release manager')
    const { secret } = await setUp(w, hedda)
    const propose = (overshootPercent: number) => admin.post(path, { content: { ...defaultPolicy, overshootPercent }, reason: 'Legs stand beside people.' }).expect(201)
    await propose(10)
    step(w, 20)
    const refused = await hedda.post(`${path}/2/sign`, { password }).expect(403)
    expect(refused.body).toMatchObject({ type: '/problems/code-asked', detail: expect.stringContaining('Nothing was done') })
    await hedda.post('/api/account/code', { code: '000000' }).expect(403)
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', personId: hedda.me.id, details: { asked: 'enter a code before signing', refusal: 'wrong-code' } })
    const { body } = await hedda.post('/api/account/code', { code: codeOf(secret, w) }).expect(200)
    expect(body).toEqual({ until: new Date(w.services.now().getTime() + 300_000).toISOString() })
    step(w, 30)
    await hedda.post(`${path}/2/sign`, { password }).expect(200)
    await propose(11)
    step(w, 31)
    await hedda.post(`${path}/3/sign`, { password }).expect(403)
  })
})

describe('the ledger', () => {
  it('holds each act on a second factor under its own name', async () => {
    const w = await aWorkplace()
    const { here } = await aSigner(w)
    const { secret } = await setUp(w, here)
    step(w, 1)
    await here.post('/api/account/recovery-codes', { password, code: codeOf(secret, w) }).expect(200)
    step(w, 2)
    await here.post('/api/account/second-factor/remove', { password, code: codeOf(secret, w) }).expect(200)
    const acts = (await w.orm.em.fork().find(LedgerEntry, {}, { orderBy: { sequence: 'asc' } })).map((e) => e.act)
    expect(acts).toEqual(['second factor set up', 'recovery codes made', 'second factor removed'])
  })
})
