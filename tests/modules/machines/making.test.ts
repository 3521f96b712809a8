import { describe, expect, it } from 'vitest'
import { defaultPolicy } from '../../../shared/contract/policy.ts'
import type { MachineView } from '../../../shared/contract/machines.ts'
import { Change } from '../../../server/modules/changes/change.entity.ts'
import { Machine } from '../../../server/modules/machines/machine.entity.ts'
import { Person } from '../../../server/modules/people/person.entity.ts'
import { policyInForce } from '../../../server/modules/policy/policy-in-force.ts'
import type { ChangeState } from '../../../shared/contract/changes.ts'
import { printSet } from '../../../shared/parameters/set-text.ts'
import { aMachine } from '../../support/a-release.ts'
import { aSet } from '../../support/a-set.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aWorkplace, type Workplace } from '../../support/workplace.ts'

const dunlin = { key: 'dunlin', name: 'Dunlin', description: 'Six-legged mud-flat survey walker' }

async function aChange(w: Workplace, state: ChangeState, number = 1) {
  const em = w.orm.em.fork()
  const machine = await em.findOneOrFail(Machine, { key: 'dunlin' })
  const author = em.getReference(Person, (await w.person('Author', [['controls engineer', null]])).id)
  em.create(Change, { machine, number, title: 'First numbers', reason: '', state, author, writers: [author.id], text: printSet(aSet()), concessions: [], createdAt: w.services.now(), alteredAt: w.services.now() })
  await em.flush()
}

describe('making a machine', () => {
  it('makes it empty, with the first version of its policy in force', async () => {
    const w = await aWorkplace()
    const administrator = await w.as('administrator')
    const made = await administrator.post('/api/machines', dunlin).expect(201)
    expect(made.body).toMatchObject({ ...dunlin, retired: false, joints: 0, buses: 0, currentVersion: null, openChanges: 0, shown: null, currentRelease: null, jointList: [], busList: [], familyList: [], changes: [] })
    expect((made.body as MachineView).may).toMatchObject({ draftChange: { allowed: false }, describe: { allowed: true }, retire: { allowed: true } })
    expect((made.body as MachineView).lastActs).toMatchObject([{ act: 'machine made', person: administrator.me.name, machine: 'dunlin' }])
    expect(await lastEntries(w)).toMatchObject([{ act: 'machine made', subject: { machine: 'dunlin' }, details: { name: 'Dunlin', policy: 1 } }])
    const em = w.orm.em.fork()
    const policy = await policyInForce(em, await em.findOneOrFail(Machine, { key: 'dunlin' }))
    expect(policy).toMatchObject({ number: 1, content: defaultPolicy, author: null, signedBy: null })
  })

  it('is refused twice under one key, a retired machine\'s too; the same request repeated under its key is answered again', async () => {
    const w = await aWorkplace()
    const administrator = await w.as('administrator')
    const first = await administrator.post('/api/machines', dunlin).set('Idempotency-Key', 'make-dunlin').expect(201)
    const again = await administrator.post('/api/machines', dunlin).set('Idempotency-Key', 'make-dunlin').expect(201)
    expect(again.body).toEqual(first.body)
    await administrator.post('/api/machines/dunlin/retire', { name: 'Dunlin' }).expect(200)
    const refused = await administrator.post('/api/machines', dunlin).expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/already-exists', errors: [{ pointer: '/key', detail: 'is taken' }] })
    expect((await administrator.get('/api/machines')).body).toHaveLength(1)
  })

  it.each([
    ['a key with capitals', { ...dunlin, key: 'Dunlin' }, '/key'],
    ['an empty name', { ...dunlin, name: '  ' }, '/name'],
    ['an unknown field', { ...dunlin, joints: 18 }, '/joints'],
    ['a description that is no text', { ...dunlin, description: null }, '/description'],
  ])('is refused with %s', async (_what, body, pointer) => {
    const w = await aWorkplace()
    const refused = await (await w.as('administrator')).post('/api/machines', body).expect(400)
    expect(refused.body.errors.map((e: { pointer: string }) => e.pointer)).toContain(pointer)
    expect(await w.orm.em.fork().count(Machine, {})).toBe(0)
  })

  it('is refused to everybody else, an administrator of one machine included', async () => {
    const w = await aWorkplace()
    await aMachine(w, 'teasel')
    for (const person of [await w.as('release manager'), await w.as([['administrator', 'teasel']])]) {
      const refused = await person.post('/api/machines', dunlin).expect(403)
      expect(refused.body).toMatchObject({ type: '/problems/not-permitted' })
    }
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { asked: 'make a machine' } }])
  })
})

describe('describing a machine', () => {
  it('alters what is given, and keeps the key', async () => {
    const w = await aWorkplace()
    await aMachine(w)
    const administrator = await w.as('administrator')
    const described = await administrator.patch('/api/machines/dunlin', { description: 'Walks on mud.' }).expect(200)
    expect(described.body).toMatchObject({ key: 'dunlin', name: 'Dunlin', description: 'Walks on mud.' })
    expect(await lastEntries(w)).toMatchObject([{ act: 'machine described', details: { before: { description: 'Dunlin for tests' }, after: { name: 'Dunlin', description: 'Walks on mud.' } } }])
    expect((await administrator.patch('/api/machines/dunlin', { key: 'other' }).expect(400)).body.errors).toMatchObject([{ pointer: '/key' }])
  })

  it('is refused to others and on a retired machine', async () => {
    const w = await aWorkplace()
    await aMachine(w)
    await (await w.as('controls engineer')).patch('/api/machines/dunlin', { name: 'Other' }).expect(403)
    const administrator = await w.as('administrator')
    await administrator.post('/api/machines/dunlin/retire', { name: 'Dunlin' }).expect(200)
    expect((await administrator.patch('/api/machines/dunlin', { name: 'Other' }).expect(409)).body).toMatchObject({ type: '/problems/wrong-state' })
    expect((await administrator.get('/api/machines/dunlin')).body.name).toBe('Dunlin')
  })
})

describe('retiring a machine', () => {
  it('takes its name typed again, and leaves it readable', async () => {
    const w = await aWorkplace()
    await aMachine(w)
    const administrator = await w.as('administrator')
    const refused = await administrator.post('/api/machines/dunlin/retire', { name: 'dunlin' }).expect(400)
    expect(refused.body).toMatchObject({ errors: [{ pointer: '/name' }], detail: expect.stringContaining('"Dunlin"') })
    const retired = await administrator.post('/api/machines/dunlin/retire', { name: ' Dunlin ' }).expect(200)
    expect(retired.body).toMatchObject({ retired: true, may: { draftChange: { allowed: false, why: 'Dunlin is retired.' }, retire: { allowed: false } } })
    expect(await lastEntries(w)).toMatchObject([{ act: 'machine retired', subject: { machine: 'dunlin' }, details: { name: 'Dunlin' } }])
    expect((await administrator.get('/api/machines')).body).toMatchObject([{ key: 'dunlin', retired: true }])
    await administrator.post('/api/machines/dunlin/retire', { name: 'Dunlin' }).expect(409)
  })

  it.each(['draft', 'submitted', 'approved'] as const)('is refused while a change is %s', async (state) => {
    const w = await aWorkplace()
    await aMachine(w)
    await aChange(w, state, 4)
    const administrator = await w.as('administrator')
    const refused = await administrator.post('/api/machines/dunlin/retire', { name: 'Dunlin' }).expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/in-use', changes: ['dunlin-4'] })
    const view = (await administrator.get('/api/machines/dunlin')).body as MachineView
    expect(view).toMatchObject({ retired: false, openChanges: 1, changes: [{ key: 'dunlin-4', state }], may: { retire: { allowed: false, why: 'One change is not released yet; release or cancel it first.' } } })
  })

  it('is allowed once every change is released or cancelled', async () => {
    const w = await aWorkplace()
    await aMachine(w)
    await aChange(w, 'released', 1)
    await aChange(w, 'cancelled', 2)
    await (await w.as('administrator')).post('/api/machines/dunlin/retire', { name: 'Dunlin' }).expect(200)
  })

  it('is refused to others', async () => {
    const w = await aWorkplace()
    await aMachine(w)
    await (await w.as('release manager')).post('/api/machines/dunlin/retire', { name: 'Dunlin' }).expect(403)
  })
})
