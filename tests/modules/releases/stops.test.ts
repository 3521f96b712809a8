import { beforeAll, describe, expect, it } from 'vitest'
import { Board, serialKey } from '../../../server/modules/boards/board.entity.ts'
import { Joint } from '../../../server/modules/machines/joint.entity.ts'
import type { CheckView } from '../../../shared/contract/checks.ts'
import type { ReleaseView } from '../../../shared/contract/releases.ts'
import { aDraft, aWalker, etag, read, through, twoKnees, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import type { SignedIn } from '../../support/workplace.ts'
import { asBytes } from './downloads.ts'

const at = '/api/machines/dunlin/releases/1.0.0'

/** A release that stands on a concession for a watchdog that is off, until a day or for a number of boards. */
async function withConcession(w: Walker, { until = null, count = null }: { until?: string | null; count?: number | null }) {
  const set = twoKnees()
  set.families.knee.values.busWatchdog = 0
  const key = await aDraft(w, set)
  const check = (await w.engineer.get(`/api/changes/${key}/check`).expect(200)).body as CheckView
  const finding = check.findings.find((f) => f.level === 'concession needed')!
  const concession = { finding: finding.key, characteristic: 'bus watchdog', limit: 'off', reason: 'The bench bus is slow.', until, count }
  await w.engineer.patch(`/api/changes/${key}`, { concessions: [concession] }).set('If-Match', etag(await read(w.engineer, key))).expect(200)
  await through(w, key)
}

describe('a release that stands on a concession', () => {
  let w: Walker
  beforeAll(async () => {
    w = await aWalker()
    await withConcession(w, { until: '2026-03-02' })
  })

  it('is handed out to the end of its last day', async () => {
    w.at('2026-03-02T23:59:59.999Z')
    const builder = await w.as([['builder', 'dunlin']])
    await asBytes(builder.get(`${at}/kit.zip`)).expect(200)
    expect(((await builder.get(at).expect(200)).body as ReleaseView).may.download).toEqual({ allowed: true })
  })

  it('is handed out to nobody from the next day on, kit or single file, and says which concession stops it', async () => {
    w.at('2026-03-03T00:00:00Z')
    const builder = await w.as([['builder', 'dunlin']])
    for (const person of [builder, await w.as([['release manager', 'dunlin']])])
      for (const path of ['kit.zip', 'joints/l1-knee/image.bin']) {
        const refused = await person.get(`${at}/${path}`).expect(409)
        expect(refused.body).toMatchObject({ type: '/problems/wrong-state', detail: expect.stringMatching(/concession for bus watchdog .* until 2026-03-02; it stops the downloads of Dunlin 1\.0\.0/) })
      }
    expect(((await builder.get(at).expect(200)).body as ReleaseView).may.download).toMatchObject({ allowed: false, why: expect.stringContaining('bus watchdog') })
  })
})

describe('a release that stands on a concession for two boards', () => {
  let w: Walker
  let builder: SignedIn
  const flash = (joint: string, serial: string) => builder.post('/api/machines/dunlin/flashes', { joint, release: '1.0.0', serial })
  const shown = async () => (await builder.get(at).expect(200)).body as ReleaseView
  beforeAll(async () => {
    w = await aWalker()
    await withConcession(w, { count: 2 })
    builder = await w.as([['builder', 'dunlin']])
  })

  it('is handed out while fewer are on record; each serial number counts once', async () => {
    await asBytes(builder.get(`${at}/kit.zip`)).expect(200)
    for (const serial of ['H-0501', 'h-0501']) await flash('l1-knee', serial).expect(201)
    const view = await shown()
    expect(view.concessions).toMatchObject([{ count: 2, used: 1, state: 'holds' }])
    expect(view.may.download).toEqual({ allowed: true })
  })

  it('records no whole machine that would overdraw it, and then none of its boards', async () => {
    const refused = await builder.post('/api/machines/dunlin/flashes/bulk', { release: '1.0.0', boards: [{ joint: 'l1-knee', serial: 'H-0502' }, { joint: 'r1-knee', serial: 'H-0503' }] }).expect(409)
    expect(refused.body.detail).toContain('H-0503 would be one more')
    await builder.get('/api/boards/H-0502').expect(404)
    expect((await shown()).concessions).toMatchObject([{ used: 1 }])
  })

  it('is handed out to nobody once both are on record, kit or single file, and its page says so', async () => {
    await flash('r1-knee', 'H-0504').expect(201)
    for (const path of ['kit.zip', 'joints/l1-knee/image.bin', 'joints/r1-knee/image.hex?board=H-0504']) {
      const refused = await builder.get(`${at}/${path}`).expect(409)
      expect(refused.body).toMatchObject({ type: '/problems/wrong-state', detail: expect.stringMatching(/concession for bus watchdog \(off\) was for 2 boards, and as many are on record; it stops the downloads of Dunlin 1\.0\.0\. Nothing was downloaded/) })
    }
    const view = await shown()
    expect(view.concessions).toMatchObject([{ count: 2, used: 2, state: 'used up' }])
    expect(view.may.download).toMatchObject({ allowed: false, why: expect.stringContaining('was for 2 boards') })
  })

  it('takes no flash of a third board, which the ledger keeps, but those that count may be flashed again', async () => {
    const refused = await flash('l1-knee', 'H-0505').expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/wrong-state', detail: expect.stringMatching(/was for 2 boards with 1\.0\.0, and as many are on record; H-0505 would be one more\. The flash was not recorded\. Keep H-0505 off L1 knee/) })
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { refusal: 'wrong-state' } }])
    await builder.get('/api/boards/H-0505').expect(404)
    await flash('r1-knee', 'H-0501').expect(201)
    expect((await shown()).concessions).toMatchObject([{ used: 2 }])
  })
})

describe('a release whose values were measured on another board than the one that sits there', () => {
  let w: Walker
  const measuredOn = twoKnees().joints['l1-knee'].board!
  beforeAll(async () => {
    w = await aWalker()
    await through(w, await aDraft(w))
    const em = w.orm.em.fork()
    const joint = await em.findOneOrFail(Joint, { key: 'l1-knee' })
    em.create(Board, { serial: 'H-0999', serialKey: serialKey('H-0999'), machine: joint.machine, joint, createdAt: w.services.now() })
    await em.flush()
  })

  it('hands out none of that joint’s files, and those of the others as before', async () => {
    const refused = await w.builder.get(`${at}/joints/l1-knee/image.bin`).expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/wrong-state', detail: expect.stringContaining(measuredOn) })
    await asBytes(w.builder.get(`${at}/joints/r1-knee/image.bin`)).expect(200)
  })

  it('hands out no kit, which holds that joint too, whatever reason is given', async () => {
    for (const query of ['', '?reason=for+the+archive']) {
      const refused = await w.builder.get(`${at}/kit.zip${query}`).expect(409)
      expect(refused.body).toMatchObject({ type: '/problems/wrong-state', detail: expect.stringContaining('H-0999 is recorded there') })
    }
    expect((await lastEntries(w))[0].act).not.toBe('kit downloaded')
    expect(((await w.builder.get(at).expect(200)).body as ReleaseView).unfit).toEqual([{ joint: 'l1-knee', name: 'L1 knee', why: expect.stringContaining(measuredOn) }])
  })
})
