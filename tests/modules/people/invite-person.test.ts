import supertest from 'supertest'
import { describe, expect, it } from 'vitest'
import { aWorkplace, password } from '../../support/workplace.ts'
import { countEntries, grantsOf, lastEntry, machines, mailedSecret, mailsTo, personNow } from './read-back.ts'

const request = { name: ' Rafiq Sandoval ', email: 'Rafiq.Sandoval@Dunlin.example', roles: [{ role: 'peer reviewer', machine: null }, { role: 'builder', machine: 'teasel' }] }
const email = 'rafiq.sandoval@dunlin.example'

describe('inviting a person', () => {
  it('makes them with their roles, a signing role unconfirmed, and mails a single-use link', async () => {
    const w = await aWorkplace()
    await machines(w)
    const admin = await w.as('administrator')
    const { body } = await admin.post('/api/people', request).expect(201)
    expect(body).toMatchObject({
      name: 'Rafiq Sandoval',
      email,
      state: 'invited',
      signingHold: null,
      roles: [{ role: 'peer reviewer', machine: null, confirmed: false }, { role: 'builder', machine: 'teasel', confirmed: true }],
      may: { grantRoles: { allowed: true }, disable: { allowed: true }, reset: { allowed: true }, enable: { allowed: false }, confirmSigning: { allowed: false } },
    })
    const [mail] = await mailsTo(w, email)
    expect(mail).toMatchObject({ subject: 'Your invitation to Detent', state: 'queued' })
    expect(mail.text).toContain(`${admin.me.name} invites you`)
    expect(mail.secretLink).toMatch(/^http:\/\/127\.0\.0\.1:4870\/links\/[\w-]{43}$/)
    const entry = await lastEntry(w)
    expect(entry).toMatchObject({ act: 'person invited', personId: admin.me.id, subject: { person: 'Rafiq Sandoval' }, details: { email, roles: ['peer reviewer on all machines', 'builder on teasel'] } })
    expect(JSON.stringify([body, entry])).not.toContain(await mailedSecret(w, email))
  })

  it('is used once: it sets the password, and the person signs in', async () => {
    const w = await aWorkplace()
    await machines(w)
    const admin = await w.as('administrator')
    const { body: invited } = await admin.post('/api/people', request).expect(201)
    await supertest(w.app).post('/api/session').send({ email, password }).expect(401)
    const secret = await mailedSecret(w, email)
    const { body: seen } = await supertest(w.app).get(`/api/links/${secret}`).expect(200)
    expect(seen).toEqual({ kind: 'invitation', name: 'Rafiq Sandoval', email, expiresAt: '2026-03-05T09:00:00.000Z' })
    const { body: used } = await supertest(w.app).post('/api/links/use').send({ secret, password }).expect(200)
    expect(used).toEqual({ email, signingHold: null })
    expect(await lastEntry(w)).toMatchObject({ act: 'password set', personName: 'Rafiq Sandoval', details: { by: 'invitation' } })
    await supertest(w.app).post('/api/session').send({ email, password }).expect(200)
    expect((await personNow(w, invited.id)).passwordHash).toMatch(/^\$argon2id\$v=19\$m=19456,(?:t=2,p=1|p=1,t=2)\$/)
    for (const again of [supertest(w.app).post('/api/links/use').send({ secret, password: 'another long password' }), supertest(w.app).get(`/api/links/${secret}`)])
      expect((await again.expect(410)).body).toMatchObject({ type: '/problems/link-used' })
    await supertest(w.app).post('/api/session').send({ email, password }).expect(200)
  })

  it('expires after 72 hours', async () => {
    const w = await aWorkplace()
    await machines(w)
    await (await w.as('administrator')).post('/api/people', request).expect(201)
    const secret = await mailedSecret(w, email)
    w.at('2026-03-05T08:59:59Z')
    await supertest(w.app).get(`/api/links/${secret}`).expect(200)
    w.at('2026-03-05T09:00:00Z')
    expect((await supertest(w.app).get(`/api/links/${secret}`).expect(410)).body.type).toBe('/problems/link-expired')
    expect((await supertest(w.app).post('/api/links/use').send({ secret, password }).expect(410)).body.type).toBe('/problems/link-expired')
    await supertest(w.app).post('/api/session').send({ email, password }).expect(401)
  })

  it('is sent again by an administrator, as an invitation', async () => {
    const w = await aWorkplace()
    await machines(w)
    const admin = await w.as('administrator')
    const { body: invited } = await admin.post('/api/people', request).expect(201)
    w.at('2026-03-09T09:00:00Z')
    const later = await w.as('administrator')
    await later.post(`/api/people/${invited.id}/reset`).expect(200)
    expect(await lastEntry(w)).toMatchObject({ act: 'invitation sent again', subject: { person: 'Rafiq Sandoval' } })
    const secret = await mailedSecret(w, email)
    expect((await supertest(w.app).get(`/api/links/${secret}`).expect(200)).body.kind).toBe('invitation')
    expect((await supertest(w.app).post('/api/links/use').send({ secret, password }).expect(200)).body.signingHold).toBeNull()
  })

  it('keeps the link usable when the password is refused', async () => {
    const w = await aWorkplace()
    await machines(w)
    await (await w.as('administrator')).post('/api/people', request).expect(201)
    const secret = await mailedSecret(w, email)
    for (const weak of ['fourteen chars', 'demo only bench lamp']) {
      const { body } = await supertest(w.app).post('/api/links/use').send({ secret, password: weak }).expect(422)
      expect(body).toMatchObject({ type: '/problems/weak-password', errors: [{ pointer: '/password' }] })
    }
    await supertest(w.app).post('/api/links/use').send({ secret, password: 'fifteen letters' }).expect(200)
  })

  it('lets one of two at once use it', async () => {
    const w = await aWorkplace()
    await machines(w)
    await (await w.as('administrator')).post('/api/people', request).expect(201)
    const secret = await mailedSecret(w, email)
    const answers = await Promise.all(['the first password', 'the second password'].map((p) => supertest(w.app).post('/api/links/use').send({ secret, password: p })))
    expect(answers.map((a) => a.status).sort()).toEqual([200, 410])
    const winner = answers[0].status === 200 ? 'the first password' : 'the second password'
    await supertest(w.app).post('/api/session').send({ email, password: winner }).expect(200)
  })
})

describe('an invitation is refused', () => {
  it.each([
    ['an address between spaces', { ...request, email: ' KNOWN@dunlin.example ' }, 400, '/email'],
    ['an address that is known', { ...request, email: 'KNOWN@dunlin.example' }, 409, '/email'],
    ['a machine that is not there', { ...request, roles: [{ role: 'builder', machine: 'heron' }] }, 400, '/roles/0/machine'],
    ['the same role twice', { ...request, roles: [request.roles[1], request.roles[1]] }, 409, '/roles/1/role'],
    ['an unknown role', { ...request, roles: [{ role: 'owner', machine: null }] }, 400, '/roles/0/role'],
    ['no address', { name: 'A', roles: [] }, 400, '/email'],
    ['an address that is none', { ...request, email: 'rafiq' }, 400, '/email'],
    ['an address with a second header', { ...request, email: 'rafiq@dunlin.example\r\nBcc: all@dunlin.example' }, 400, '/email'],
    ['an empty name', { ...request, name: '   ' }, 400, '/name'],
    ['a name that turns its direction', { ...request, name: 'Rafiq \u202Elavodnas' }, 400, '/name'],
    ['a name with half a character', { ...request, name: 'Rafiq \uD83D' }, 400, '/name'],
    ['a field that would set the password', { ...request, passwordHash: 'x' }, 400, '/passwordHash'],
    ['a field that would confirm', { ...request, roles: [{ role: 'peer reviewer', machine: null, confirmedAt: '2026-01-01' }] }, 400, '/roles/0/confirmedAt'],
  ])('for %s', async (_what, body, status, pointer) => {
    const w = await aWorkplace()
    await machines(w)
    const admin = await w.as('administrator')
    await admin.post('/api/people', { name: 'Known', email: 'known@dunlin.example', roles: [] }).expect(201)
    const before = await countEntries(w)
    const answer = await admin.post('/api/people', body).expect(status)
    expect(answer.body.errors.map((e: { pointer: string }) => e.pointer)).toContain(pointer)
    expect(answer.body.detail).toMatch(/Nobody|Nothing/)
    expect(await countEntries(w)).toBe(before)
    expect((await admin.get('/api/people')).body.people).toHaveLength(3)
    expect(await mailsTo(w, email)).toEqual([])
  })

  it.each(['observer', 'controls engineer', 'peer reviewer', 'release manager', 'builder'] as const)('to a %s, and the attempt is written down', async (role) => {
    const w = await aWorkplace()
    const person = await w.as(role)
    const { body } = await person.post('/api/people', { ...request, roles: [] }).expect(403)
    expect(body.type).toBe('/problems/not-permitted')
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', personId: person.me.id, details: { asked: 'invite a person', refusal: 'not-permitted' } })
  })

  it('to an administrator of one machine', async () => {
    const w = await aWorkplace()
    await machines(w)
    await (await w.as([['administrator', 'dunlin']])).post('/api/people', { ...request, roles: [] }).expect(403)
  })
})

describe('granting a role', () => {
  it('adds it at once, mails it, writes it down; a signing role waits', async () => {
    const w = await aWorkplace()
    await machines(w)
    const admin = await w.as('administrator')
    const person = await w.person('Pascoe Adeyemi', [['builder', null]])
    const theirs = await w.signIn(person)
    const { body } = await admin.post(`/api/people/${person.id}/roles`, { role: 'release manager', machine: 'dunlin' }).expect(200)
    expect(body.roles).toEqual([{ id: expect.any(Number), role: 'builder', machine: null, confirmed: true }, { id: expect.any(Number), role: 'release manager', machine: 'dunlin', confirmed: false }])
    expect((await theirs.get('/api/me')).body.acts.dunlin).not.toContain('sign release')
    expect((await theirs.get('/api/me')).body.acts.dunlin).toContain('withdraw')
    expect((await mailsTo(w, person.email))[0].text).toContain(`${admin.me.name} granted you the role release manager on dunlin.\nYou can sign with it once another signer confirms it.`)
    expect(await lastEntry(w)).toMatchObject({ act: 'role granted', machineKey: 'dunlin', subject: { person: 'Pascoe Adeyemi', machine: 'dunlin' }, details: { role: 'release manager', personId: person.id } })
    await admin.post(`/api/people/${person.id}/roles`, { role: 'observer', machine: null }).expect(200)
    expect((await mailsTo(w, person.email))[0].text).not.toContain('confirms')
  })

  it('is refused for a role held there, for a machine that is not there, for a disabled person and for nobody', async () => {
    const w = await aWorkplace()
    await machines(w)
    const admin = await w.as('administrator')
    const person = await w.person('Pascoe Adeyemi', [['builder', 'dunlin']])
    const roles = `/api/people/${person.id}/roles`
    expect((await admin.post(roles, { role: 'builder', machine: 'dunlin' }).expect(409)).body).toMatchObject({ type: '/problems/already-exists', errors: [{ pointer: '/role' }] })
    expect((await admin.post(roles, { role: 'builder', machine: 'heron' }).expect(400)).body.errors).toEqual([{ pointer: '/machine', detail: expect.any(String) }])
    expect((await admin.post(roles, { role: 'builder' }).expect(400)).body.errors[0].pointer).toBe('/machine')
    for (const nobody of ['4711', 'x', '1e3', '-1', '0']) await admin.post(`/api/people/${nobody}/roles`, { role: 'builder', machine: null }).expect(404)
    await admin.post(`/api/people/${person.id}/disable`).expect(200)
    expect((await admin.post(roles, { role: 'observer', machine: null }).expect(409)).body.type).toBe('/problems/wrong-state')
    expect(await grantsOf(w, person.id)).toHaveLength(1)
  })
})

describe('ending a role', () => {
  it('takes its rights and ends their sessions at once, and keeps it on record', async () => {
    const w = await aWorkplace()
    await machines(w)
    const admin = await w.as('administrator')
    const person = await w.person('Hedda Lindqvist', [['release manager', 'dunlin'], ['builder', null]])
    const theirs = await w.signIn(person)
    const [grant] = await grantsOf(w, person.id)
    const { body } = await admin.delete(`/api/people/${person.id}/roles/${grant.id}`).expect(200)
    expect(body.roles.map((r: { role: string }) => r.role)).toEqual(['builder'])
    await theirs.get('/api/me').expect(401)
    expect((await (await w.signIn(person)).get('/api/me')).body.acts['*']).not.toContain('withdraw')
    expect(await lastEntry(w)).toMatchObject({ act: 'role ended', machineKey: 'dunlin', details: { role: 'release manager', machine: 'dunlin', sessionsEnded: 1 } })
    expect((await mailsTo(w, person.email))[0].text).toContain('ended your role release manager on dunlin')
    expect((await admin.delete(`/api/people/${person.id}/roles/${grant.id}`).expect(409)).body.type).toBe('/problems/wrong-state')
  })

  it("does not find another person's grant", async () => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    const one = await w.person('Pascoe Adeyemi', [['builder', null]])
    const two = await w.person('Yuna Brandt', [['observer', null]])
    const [grant] = await grantsOf(w, two.id)
    await admin.delete(`/api/people/${one.id}/roles/${grant.id}`).expect(404)
    for (const none of ['0', 'x', '99999']) await admin.delete(`/api/people/${one.id}/roles/${none}`).expect(404)
    expect(await grantsOf(w, two.id)).toHaveLength(1)
  })
})

describe('the last administrator', () => {
  it('stays: neither their role nor they can be taken, by themselves included', async () => {
    const w = await aWorkplace()
    await machines(w)
    const admin = await w.as('administrator')
    const [grant] = await grantsOf(w, admin.me.id)
    // neither of these can keep people: on one machine only, invited, disabled
    await w.person('Administrator of one', [['administrator', 'dunlin']])
    await admin.post('/api/people', { name: 'Invited', email: 'invited@dunlin.example', roles: [{ role: 'administrator', machine: null }] }).expect(201)
    const second = await w.person('Silvan Okoro', [['administrator', null]])
    await admin.post(`/api/people/${second.id}/disable`).expect(200)
    for (const refused of [admin.delete(`/api/people/${admin.me.id}/roles/${grant.id}`), admin.post(`/api/people/${admin.me.id}/disable`)])
      expect((await refused.expect(422)).body).toMatchObject({ type: '/problems/last-administrator', detail: expect.stringContaining('last administrator') })
    expect((await admin.get(`/api/people/${admin.me.id}`)).body.may.disable).toEqual({ allowed: false, why: expect.stringContaining('last administrator') })
    await admin.post(`/api/people/${second.id}/enable`).expect(200)
    await admin.delete(`/api/people/${admin.me.id}/roles/${grant.id}`).expect(200)
    await admin.get('/api/me').expect(401)
  })

  it('stays when two end each other at once', async () => {
    const w = await aWorkplace()
    const one = await w.as('administrator')
    const two = await w.as('administrator')
    const [ofOne] = await grantsOf(w, one.me.id)
    const [ofTwo] = await grantsOf(w, two.me.id)
    const answers = await Promise.all([one.delete(`/api/people/${two.me.id}/roles/${ofTwo.id}`), two.delete(`/api/people/${one.me.id}/roles/${ofOne.id}`)])
    expect(answers.map((a) => a.status).sort()[0]).toBe(200)
    expect([...(await grantsOf(w, one.me.id)), ...(await grantsOf(w, two.me.id))]).toHaveLength(1)
  })
})

describe('disabling and enabling', () => {
  it('ends sessions and links at once, and gives the same password back', async () => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    const person = await w.person('Pascoe Adeyemi', [['builder', null]])
    const theirs = await w.signIn(person)
    await admin.post(`/api/people/${person.id}/reset`).expect(200)
    const secret = await mailedSecret(w, person.email)
    const { body } = await admin.post(`/api/people/${person.id}/disable`).expect(200)
    expect(body).toMatchObject({ state: 'disabled', may: { disable: { allowed: false }, enable: { allowed: true }, reset: { allowed: false } } })
    expect(await lastEntry(w)).toMatchObject({ act: 'person disabled', subject: { person: 'Pascoe Adeyemi' }, details: { sessionsEnded: 1 } })
    expect((await mailsTo(w, person.email))[0].text).toContain('disabled your access')
    await theirs.get('/api/me').expect(401)
    await supertest(w.app).post('/api/session').send({ email: person.email, password }).expect(401)
    await supertest(w.app).get(`/api/links/${secret}`).expect(410)
    expect((await admin.post(`/api/people/${person.id}/disable`).expect(409)).body.type).toBe('/problems/wrong-state')
    expect((await admin.post(`/api/people/${person.id}/reset`).expect(409)).body.type).toBe('/problems/wrong-state')

    await admin.post(`/api/people/${person.id}/enable`).expect(200)
    expect(await lastEntry(w)).toMatchObject({ act: 'person enabled' })
    expect((await mailsTo(w, person.email))[0].text).toContain('enabled your access again')
    expect((await admin.post(`/api/people/${person.id}/enable`).expect(409)).body.type).toBe('/problems/wrong-state')
    await supertest(w.app).get(`/api/links/${secret}`).expect(410)
    await w.signIn(person)
  })
})
