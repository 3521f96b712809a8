import { describe, expect, it } from 'vitest'
import type { BusView } from '../../../shared/contract/machines.ts'
import { twoKnees } from '../../support/a-walker-set.ts'
import { aRelease } from '../../support/a-release.ts'
import { aWalker } from '../../support/a-walker.ts'

describe('the plan of a bus', () => {
  it('points out what two open changes would put at one address, counts their claims as taken, and forgets a cancelled one', async () => {
    const w = await aWalker()
    await aRelease(w, { version: '1.0.0', set: twoKnees() })
    const bus = async () => (await w.observer.get('/api/machines/dunlin/buses/fore').expect(200)).body as BusView
    expect(await bus()).toMatchObject({ claims: [], contested: [], addressBytes: { 'l1-knee': 1, 'r1-knee': 1 }, loadPercent: { advise: 70, block: 100 } })
    const moved = async (title: string, joint: string) => {
      const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title }).expect(201)).body as { key: string }
      await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: `/joints/${joint}/address`, from: twoKnees().joints[joint].address, to: 0x44 }] }).expect(200)
      return key
    }
    const first = await moved('Left knee to 0x44', 'l1-knee')
    expect(await bus()).toMatchObject({ claims: [{ change: first, joint: 'l1-knee', address: 0x44, state: 'draft' }], contested: [] })
    const second = await moved('Right knee to 0x44', 'r1-knee')
    expect((await bus()).contested).toMatchObject([{ address: 0x44, holder: null, claims: [{ change: second }, { change: first }] }])
    const { revision } = (await w.engineer.get(`/api/changes/${second}`)).body as { revision: number }
    await w.engineer.post(`/api/changes/${second}/cancel`, { reason: 'Taken already.' }).set('If-Match', `"${revision}"`).expect(200)
    expect((await bus()).contested).toEqual([])
  })
})
