import { describe, expect, it } from 'vitest'
import { Person } from '../../../server/modules/people/person.entity.ts'
import { lastEntries } from '../../support/ledger.ts'
import { mailsTo } from '../people/read-back.ts'
import { aBench, flash, l1, r1, readBoard, withdraw } from './a-bench.ts'

describe('withdrawing a release', () => {
  it('mails its reason and the boards that hold it to everybody who flashed it, once each', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    await flash(w.builder, { serial: l1 }).expect(201)
    await flash(w.other, { serial: r1, joint: 'r1-knee' }).expect(201)
    // a third person flashed an older one
    const elsewhere = await w.as([['builder', 'dunlin']])
    await flash(elsewhere, { serial: 'H-0500', release: '1.0.0' }).expect(201)
    await flash(w.builder, { serial: l1 }).expect(201)

    await withdraw(w, '1.1.0', 'The hips hum at 41 Hz above 2.1 A.')
    for (const person of [w.builder, w.other]) {
      const mails = await mailsTo(w, person.me.email)
      expect(mails.map((m) => m.subject)).toEqual(['Withdrawn: Dunlin 1.1.0'])
      expect(mails[0].text).toContain('The hips hum at 41 Hz above 2.1 A.')
      expect(mails[0].text).toContain(`  ${l1} at L1 knee\n  ${r1} at R1 knee\n`)
      expect(mails[0].text).not.toContain('H-0500')
    }
    expect(await mailsTo(w, elsewhere.me.email)).toEqual([])
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'release withdrawn', details: { boards: [l1, r1] } })
    expect(await readBoard(w.builder, l1)).toMatchObject({ state: 'withdrawn release on board' })
    expect((await w.builder.get('/api/machines/dunlin/boards').expect(200)).body).toMatchObject({ current: null, newest: { version: '1.1.0', withdrawn: true } })
  })

  it('writes to nobody who can no longer sign in, and says when no board holds it', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    await flash(w.other, { serial: l1, release: '1.0.0' }).expect(201)
    const em = w.orm.em.fork()
    await em.nativeUpdate(Person, { id: w.other.me.id }, { disabledAt: w.services.now() })
    await withdraw(w, '1.0.0')
    expect(await mailsTo(w, w.other.me.email)).toEqual([])
    await withdraw(w, '1.1.0')
    expect((await mailsTo(w, w.builder.me.email))[0].text).toContain('No board is on record with it.')
  })

  it('puts a flash of it on record all the same, marked, and tells the release managers: singly, as a machine, or from a table', async () => {
    const w = await aBench()
    await withdraw(w, '1.1.0', 'The hips hum.')
    const before = (await mailsTo(w, w.manager.me.email)).length
    await flash(w.builder, { serial: l1 }).expect(201)
    const [entry] = await lastEntries(w)
    expect(entry).toMatchObject({ act: 'flash recorded', details: { withdrawn: true } })
    expect(await readBoard(w.builder, l1)).toMatchObject({ state: 'withdrawn release on board' })
    const told = async () => (await mailsTo(w, w.manager.me.email)).sort((a, b) => a.id - b.id).slice(before)
    const single = await told()
    expect(single.map((m) => m.subject)).toEqual(['Flashed though withdrawn: Dunlin 1.1.0'])
    expect(single[0].text).toMatch(/The hips hum\.[^]*  H-0270 at L1 knee/)
    await w.builder.post('/api/machines/dunlin/flashes/bulk', { release: '1.1.0', boards: [{ joint: 'l1-knee', serial: l1 }, { joint: 'r1-knee', serial: r1 }] }).expect(201)
    const text = `serial,joint,release\nH-0900,l1-knee,1.1.0\n`
    const preview = (await w.builder.post('/api/machines/dunlin/boards/preview', { text }).expect(200)).body as { hash: string; rows: { does: string[] }[] }
    expect(preview.rows[0].does).toContain('recorded as flashed with 1.1.0, which is withdrawn')
    await w.builder.post('/api/machines/dunlin/boards/import', { text, decidedOn: preview.hash }).expect(200)
    const all = await told()
    expect(all).toHaveLength(3)
    expect(all[1].text).toContain(`  ${l1} at L1 knee\n  ${r1} at R1 knee`)
    expect(all[2].text).toContain('  H-0900 at L1 knee')
    // of a release that stands nobody is told
    await flash(w.builder, { serial: l1, release: '1.0.0' }).expect(201)
    expect(await told()).toHaveLength(3)
  })
})
