import { describe, expect, it } from 'vitest'
import { currentRelease, newestRelease } from '../../../server/modules/machines/current-release.ts'
import { Change } from '../../../server/modules/changes/change.entity.ts'
import { ChangeEvent } from '../../../server/modules/changes/change-event.entity.ts'
import { Machine } from '../../../server/modules/machines/machine.entity.ts'
import { Person } from '../../../server/modules/people/person.entity.ts'
import { Release } from '../../../server/modules/releases/release.entity.ts'
import type { MachineView } from '../../../shared/contract/machines.ts'
import { printSet } from '../../../shared/parameters/set-text.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { aMachine, aRelease } from '../../support/a-release.ts'
import { aSet } from '../../support/a-set.ts'
import { aWorkplace, type Workplace } from '../../support/workplace.ts'

/** A change on the newest release, returned once, whose text is the given set. */
async function aReturnedChange(w: Workplace, set: MachineSet) {
  const em = w.orm.em.fork()
  const machine = await em.findOneOrFail(Machine, { key: 'dunlin' })
  const baseRelease = await newestRelease(em, machine)
  const author = em.getReference(Person, (await w.person('Author', [['controls engineer', null]])).id)
  const at = w.services.now()
  const change = em.create(Change, { machine, number: 9, title: 'Softer knees', reason: '', state: 'draft', author, writers: [author.id], baseRelease, text: printSet(set), concessions: [], createdAt: at, alteredAt: at })
  em.create(ChangeEvent, { change, kind: 'returned', person: author, at, note: 'Say why.' })
  await em.flush()
}

describe('the list of machines', () => {
  it('holds those that the person may read, with the current version and counts', async () => {
    const w = await aWorkplace()
    await aRelease(w, { version: '1.0.0' })
    await aRelease(w, { version: '1.1.0' })
    await aMachine(w, 'teasel')
    const all = (await (await w.as('observer')).get('/api/machines').expect(200)).body
    expect(all).toMatchObject([
      { key: 'dunlin', name: 'Dunlin', retired: false, joints: 3, buses: 2, currentVersion: '1.1.0', openChanges: 0 },
      { key: 'teasel', joints: 0, buses: 0, currentVersion: null },
    ])
    const some = (await (await w.as([['builder', 'teasel']])).get('/api/machines').expect(200)).body
    expect(some.map((m: { key: string }) => m.key)).toEqual(['teasel'])
  })
})

describe('a machine', () => {
  it('shows its newest release: joints with their revisions, families, buses', async () => {
    const w = await aWorkplace()
    await aRelease(w, { title: 'First numbers' })
    const view = (await (await w.as('observer')).get('/api/machines/dunlin').expect(200)).body as MachineView
    expect(view.shown).toEqual({ version: '1.0.0', sequence: 1, withdrawn: false })
    expect(view.currentRelease).toMatchObject({ machine: 'dunlin', version: '1.0.0', sequence: 1, state: 'current', title: 'First numbers', change: 'dunlin-1', releasedBy: 'Release Signer', joints: 3 })
    expect(view.jointList).toEqual([
      { key: 'knee-port', name: 'Knee port', family: 'knee', familyName: 'Knees', bus: 'port', address: 0x20, firmware: 'hinge 2.1.0', revision: 1, mode: 'position', ownValues: 2, waiting: [] },
      { key: 'knee-starboard', name: 'Knee starboard', family: 'knee', familyName: 'Knees', bus: 'starboard', address: 0x20, firmware: 'hinge 2.1.0', revision: 1, mode: 'position', ownValues: 0, waiting: [] },
      { key: 'hip-port', name: 'Hip port', family: 'hip', familyName: 'Hips', bus: 'port', address: 0x21, firmware: 'hinge 2.1.0', revision: 1, mode: 'velocity', ownValues: 0, waiting: [] },
    ])
    expect(view.familyList).toEqual([{ key: 'knee', name: 'Knees', joints: 2, driveTrainNumber: 1 }, { key: 'hip', name: 'Hips', joints: 1, driveTrainNumber: 1 }])
    expect(view.busList).toMatchObject([{ key: 'port', joints: 2, doubled: [], settings: { bitRate: 400_000 } }, { key: 'starboard', joints: 1, doubled: [] }])
  })

  it('has no current release after a withdrawal; the newest set stays shown, marked, until the next release', async () => {
    const w = await aWorkplace()
    await aRelease(w, { version: '1.0.0' })
    await aRelease(w, { version: '1.1.0', withdrawn: 'A knee hunts at full load.' })
    const observer = await w.as('observer')
    const view = (await observer.get('/api/machines/dunlin').expect(200)).body as MachineView
    expect(view).toMatchObject({ currentVersion: null, currentRelease: null, shown: { version: '1.1.0', sequence: 2, withdrawn: true }, joints: 3 })
    expect((await observer.get('/api/machines/dunlin/joints/knee-port').expect(200)).body.shown).toMatchObject({ withdrawn: true })
    const em = w.orm.em.fork()
    const machine = await em.findOneOrFail(Machine, { key: 'dunlin' })
    expect(await currentRelease(em, machine)).toBeNull()
    expect((await newestRelease(em, machine))?.version).toBe('1.1.0')
    await aRelease(w, { version: '1.1.1' })
    expect((await observer.get('/api/machines/dunlin')).body).toMatchObject({ currentVersion: '1.1.1', shown: { sequence: 3, withdrawn: false } })
  })

  it('keeps its current release when an older one is withdrawn', async () => {
    const w = await aWorkplace()
    await aRelease(w, { version: '1.0.0', withdrawn: 'Superseded anyway.' })
    await aRelease(w, { version: '1.1.0' })
    const em = w.orm.em.fork()
    expect((await currentRelease(em, await em.findOneOrFail(Machine, { key: 'dunlin' })))?.version).toBe('1.1.0')
  })

  it('names at each joint the open changes that touch it, with how they stand', async () => {
    const w = await aWorkplace()
    await aRelease(w)
    const set = aSet()
    set.families.knee.values.currentLimit = 1.5
    set.joints['knee-port'].values.currentLimit = 1.8
    await aReturnedChange(w, set)
    const view = (await (await w.as('observer')).get('/api/machines/dunlin').expect(200)).body as MachineView
    expect(Object.fromEntries(view.jointList.map((j) => [j.key, j.waiting]))).toEqual({
      'knee-port': [{ change: 'dunlin-9', state: 'returned' }],
      'knee-starboard': [{ change: 'dunlin-9', state: 'returned' }],
      'hip-port': [],
    })
    const em = w.orm.em.fork()
    const hipAlone = aSet()
    hipAlone.joints['hip-port'].address = 0x30
    ;(await em.findOneOrFail(Change, { number: 9 })).text = printSet(hipAlone)
    await em.flush()
    const later = (await (await w.as('observer')).get('/api/machines/dunlin').expect(200)).body as MachineView
    expect(later.jointList.filter((j) => j.waiting.length > 0).map((j) => j.key)).toEqual(['hip-port'])
    expect(view.changes).toMatchObject([{ key: 'dunlin-9', life: 'returned', author: 'Author', baseVersion: '1.0.0' }])
  })

  it('shows doubled addresses of a bus, other devices counted', async () => {
    const w = await aWorkplace()
    const set = aSet()
    set.joints['hip-port'].address = 0x68
    await aRelease(w, { set })
    const view = (await (await w.as('observer')).get('/api/machines/dunlin').expect(200)).body as MachineView
    expect(view.busList.map((b) => b.doubled)).toEqual([[0x68], []])
  })

  it('that the person may not read looks like one that does not exist', async () => {
    const w = await aWorkplace()
    await aRelease(w)
    await aMachine(w, 'teasel')
    const stranger = await w.as([['observer', 'teasel']])
    for (const path of ['', '/joints/knee-port', '/families/knee', '/buses/port']) {
      const hidden = await stranger.get(`/api/machines/dunlin${path}`).expect(404)
      const absent = await stranger.get(`/api/machines/nowhere${path}`).expect(404)
      expect({ ...hidden.body, instance: '' }).toEqual({ ...absent.body, instance: '' })
    }
    await stranger.patch('/api/machines/dunlin', { name: 'Mine' }).expect(404)
  })

  it('answers without any role with a refusal, and signed out not at all', async () => {
    const w = await aWorkplace()
    await (await w.as([])).get('/api/machines').expect(403)
    const supertest = (await import('supertest')).default
    await supertest(w.app).get('/api/machines').expect(401)
  })
})

describe('the release builder of these tests', () => {
  it('leaves what a release leaves: one revision for joints that stay the same', async () => {
    const w = await aWorkplace()
    await aRelease(w, { version: '1.0.0' })
    const set = aSet()
    set.joints['knee-port'].values.velocityGain = 0.45
    await aRelease(w, { version: '1.0.1', set })
    const view = (await (await w.as('observer')).get('/api/machines/dunlin')).body as MachineView
    expect(view.jointList.map((j) => j.revision)).toEqual([2, 1, 1])
    expect(await w.orm.em.fork().count(Release, {})).toBe(2)
  })
})
