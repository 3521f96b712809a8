import { describe, expect, it } from 'vitest'
import { foundWorkplace } from '../../../server/modules/people/found-workplace.ts'
import { Person } from '../../../server/modules/people/person.entity.ts'
import supertest from 'supertest'
import { aWorkplace, password } from '../../support/workplace.ts'
import { grantsOf, lastEntry, machines, mailsTo } from './read-back.ts'

const names = (body: { people: { name: string }[] }) => body.people.map((p) => p.name)

describe('who sees whom', () => {
  it('shows an administrator and a signer everybody, others those of their machines', async () => {
    const w = await aWorkplace()
    await machines(w)
    const dunlin = await w.person('Tobias Oyelaran', [['controls engineer', 'dunlin']])
    const teasel = await w.person('Mirela Castanho', [['controls engineer', 'teasel']])
    await w.person('Silvan Okoro', [['administrator', null]])
    await w.person('Without a role', [])
    const all = ['Maker', 'Mirela Castanho', 'Silvan Okoro', 'Tobias Oyelaran', 'Without a role']
    const asAdmin = await w.as('administrator')
    expect(names((await asAdmin.get('/api/people').expect(200)).body)).toEqual(expect.arrayContaining(all))
    expect((await asAdmin.get('/api/people')).body.may.invite).toEqual({ allowed: true })
    const asSigner = await w.as([['peer reviewer', 'teasel']])
    expect(names((await asSigner.get('/api/people').expect(200)).body)).toEqual(expect.arrayContaining(all))
    const asBuilder = await w.as([['builder', 'dunlin']])
    const { body } = await asBuilder.get('/api/people').expect(200)
    expect(names(body)).toContain('Tobias Oyelaran')
    expect(names(body)).toContain('Silvan Okoro')
    expect(names(body)).not.toContain('Mirela Castanho')
    expect(names(body)).not.toContain('Without a role')
    expect(body.may.invite).toEqual({ allowed: false, why: 'This takes the role administrator.' })
    await asBuilder.get(`/api/people/${teasel.id}`).expect(404)
    await asBuilder.get(`/api/people/${dunlin.id}`).expect(200)
  })

  it('shows addresses to administrators and to oneself, and never what opens an account', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const theirs = await w.signIn(person)
    const admin = await w.as('administrator')
    const other = await w.as('release manager')
    expect((await admin.get(`/api/people/${person.id}`)).body.email).toBe(person.email)
    expect((await theirs.get(`/api/people/${person.id}`)).body.email).toBe(person.email)
    const { body } = await other.get(`/api/people/${person.id}`)
    expect(body.email).toBeNull()
    expect(Object.keys(body).sort()).toEqual(['email', 'id', 'may', 'name', 'roles', 'secondFactor', 'signingHold', 'state'])
  })

  it('shows nobody to who holds no role', async () => {
    const w = await aWorkplace()
    const person = await w.as([])
    expect((await person.get('/api/people').expect(403)).body.type).toBe('/problems/not-permitted')
    expect(person.me.acts).toEqual({ '*': [] })
  })
})

describe('founding a workplace', () => {
  const first = { name: 'Silvan Okoro', email: 'Silvan.Okoro@dunlin.example' }

  it('makes the first administrator and hands back the link that is mailed too', async () => {
    const w = await aWorkplace()
    const found = () => w.orm.em.fork().transactional((em) => foundWorkplace(em, { ...first, baseUrl: 'http://127.0.0.1:4870', now: w.services.now() }))
    const address = await found()
    expect(address).toMatch(/^http:\/\/127\.0\.0\.1:4870\/links\/[\w-]{43}$/)
    const [mail] = await mailsTo(w, 'silvan.okoro@dunlin.example')
    expect(mail.secretLink).toBe(address)
    expect(await lastEntry(w)).toMatchObject({ sequence: 1, act: 'workplace founded', personName: 'Detent', subject: { person: 'Silvan Okoro' } })
    const again = await found()
    expect(again).not.toBe(address)
    const [person] = await w.orm.em.fork().find(Person, {})
    expect((await grantsOf(w, person.id)).map((g) => g.role)).toEqual(['administrator'])
    const secret = again.slice(again.lastIndexOf('/') + 1)
    await supertest(w.app).post('/api/links/use').send({ secret, password }).expect(200)
    const admin = await w.signIn(person)
    expect(admin.me.acts['*']).toContain('keep people')
    await expect(found()).rejects.toMatchObject({ code: 'already-exists' })
    await admin.post('/api/people', { name: 'Second', email: 'second@dunlin.example', roles: [] }).expect(201)
  })

  it('refuses what is no name and no address', async () => {
    const w = await aWorkplace()
    for (const wrong of [{ ...first, email: 'silvan' }, { ...first, name: ' ' }, { ...first, name: 'Sil\nvan' }])
      await expect(w.orm.em.fork().transactional((em) => foundWorkplace(em, { ...wrong, baseUrl: 'http://127.0.0.1:4870', now: w.services.now() }))).rejects.toMatchObject({ code: 'invalid-request' })
    expect(await w.orm.em.fork().count(Person)).toBe(0)
  })
})
