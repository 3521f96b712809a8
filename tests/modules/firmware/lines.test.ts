import { describe, expect, it } from 'vitest'
import type { FirmwareLineView } from '../../../shared/contract/firmware.ts'
import { aFirmware } from '../../support/a-firmware.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aWorkplace } from '../../support/workplace.ts'

const hinge = { key: 'hinge', name: 'Hinge', description: 'Small leg board' }

describe('firmware lines', () => {
  it('are made by a controls engineer, with an entry in the ledger', async () => {
    const w = await aWorkplace()
    const engineer = await w.as('controls engineer')
    const made = await engineer.post('/api/firmware', hinge).expect(201)
    expect(made.body).toEqual({ ...hinge, versions: [], may: { draftVersion: { allowed: true }, describe: { allowed: true } } })
    expect(await lastEntries(w)).toMatchObject([{ act: 'firmware line made', subject: { firmware: 'hinge' }, details: { name: 'Hinge' } }])
  })

  it('are listed with their versions, the newest version first by SemVer, to everybody who reads', async () => {
    const w = await aWorkplace()
    for (const version of ['2.0.0', '2.10.0', '2.9.0', '2.10.0-rc.1']) await aFirmware(w, { version })
    const list = (await (await w.as('observer')).get('/api/firmware').expect(200)).body as FirmwareLineView[]
    expect(list.map((l) => l.key)).toEqual(['hinge'])
    expect(list[0].versions.map((v) => v.version)).toEqual(['2.10.0', '2.10.0-rc.1', '2.9.0', '2.0.0'])
    expect(list[0].versions[0]).toMatchObject({ line: 'hinge', state: 'published', uploadedBy: 'Firmware Author', publishedBy: 'Firmware Signer', parameters: 8, imageBytes: 32 })
    expect(list[0].may.draftVersion).toMatchObject({ allowed: false })
  })

  it('keep their key when they are described', async () => {
    const w = await aWorkplace()
    const engineer = await w.as('controls engineer')
    await engineer.post('/api/firmware', hinge).expect(201)
    const described = await engineer.patch('/api/firmware/hinge', { name: 'Hinge two' }).expect(200)
    expect(described.body).toMatchObject({ key: 'hinge', name: 'Hinge two', description: hinge.description })
    expect(await lastEntries(w)).toMatchObject([{ act: 'firmware line described', details: { before: { name: 'Hinge' }, after: { name: 'Hinge two' } } }])
    const refused = await engineer.patch('/api/firmware/hinge', { key: 'other' }).expect(400)
    expect(refused.body.errors).toEqual([{ pointer: '/key', detail: '"key" is not known here' }])
  })

  it('are refused twice under one key; the same request repeated under its key is answered again', async () => {
    const w = await aWorkplace()
    const engineer = await w.as('controls engineer')
    const first = await engineer.post('/api/firmware', hinge).set('Idempotency-Key', 'make-hinge-1').expect(201)
    const again = await engineer.post('/api/firmware', hinge).set('Idempotency-Key', 'make-hinge-1').expect(201)
    expect(again.body).toEqual(first.body)
    const refused = await engineer.post('/api/firmware', hinge).expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/already-exists', errors: [{ pointer: '/key', detail: 'is taken' }] })
    expect((await engineer.get('/api/firmware')).body).toHaveLength(1)
  })

  it('are refused with a key that a joint\'s firmware name would not hold', async () => {
    const w = await aWorkplace()
    const refused = await (await w.as('controls engineer')).post('/api/firmware', { ...hinge, key: 'h'.repeat(40) }).expect(400)
    expect(refused.body.errors.map((e: { pointer: string }) => e.pointer)).toContain('/key')
  })

  it('are refused to those who draft no firmware, and the attempt is recorded', async () => {
    const w = await aWorkplace()
    const refused = await (await w.as('builder')).post('/api/firmware', hinge).expect(403)
    expect(refused.body.detail).toContain('controls engineer')
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { asked: 'make a firmware line', refusal: 'not-permitted' } }])
  })

  it('that do not exist are not found', async () => {
    const w = await aWorkplace()
    const refused = await (await w.as('controls engineer')).patch('/api/firmware/nowhere', { name: 'x' }).expect(404)
    expect(refused.body.detail).toContain('nowhere')
  })
})
