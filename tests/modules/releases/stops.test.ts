import { beforeAll, describe, expect, it } from 'vitest'
import { Board, serialKey } from '../../../server/modules/boards/board.entity.ts'
import { Joint } from '../../../server/modules/machines/joint.entity.ts'
import type { CheckView } from '../../../shared/contract/checks.ts'
import type { ReleaseView } from '../../../shared/contract/releases.ts'
import { aDraft, aWalker, etag, read, through, twoKnees, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import { asBytes } from './downloads.ts'

const at = '/api/machines/dunlin/releases/1.0.0'

/** A release that stands on a concession for a watchdog that is off, until a day. */
async function withConcession(w: Walker, until: string) {
  const set = twoKnees()
  set.families.knee.values.busWatchdog = 0
  const key = await aDraft(w, set)
  const check = (await w.engineer.get(`/api/changes/${key}/check`).expect(200)).body as CheckView
  const finding = check.findings.find((f) => f.level === 'concession needed')!
  const concession = { finding: finding.key, characteristic: 'bus watchdog', limit: 'off', reason: 'The bench bus is slow.', until, count: null }
  await w.engineer.patch(`/api/changes/${key}`, { concessions: [concession] }).set('If-Match', etag(await read(w.engineer, key))).expect(200)
  await through(w, key)
}

describe('a release that stands on a concession', () => {
  let w: Walker
  beforeAll(async () => {
    w = await aWalker()
    await withConcession(w, '2026-03-02')
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
