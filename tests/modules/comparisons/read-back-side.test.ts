import { describe, expect, it } from 'vitest'
import type { CompareChoices, ComparisonView } from '../../../shared/contract/comparisons.ts'
import { aBench, dumpOf, fileOf, flash, l1 } from '../boards/a-bench.ts'

describe('a read-back as a side', () => {
  it('is held against a release and a draft, by value and by register, gaps included', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    const image = await fileOf(w.builder, '1.1.0', 'l1-knee')
    // hinge 2.1.0: velocity gain as q7.24 at 0x24, low byte first, so byte 0x27 counts whole A·s/rad; no register lies at 0x5D
    image[0x27] = 5
    image[0x5d] = 0x12
    await w.builder.post(`/api/boards/${l1}/read-backs`, { dump: dumpOf(image) }).expect(201)
    const { kinds } = (await w.observer.get('/api/machines/dunlin/compare-choices').expect(200)).body as CompareChoices
    const [choice] = kinds.find((k) => k.kind === 'read-back')!.choices
    expect(choice.label).toContain(l1)
    const view = (await w.observer.get(`/api/compare?a=release:dunlin@1.1.0:l1-knee&b=${choice.ref}`).expect(200)).body as ComparisonView
    expect(view.b).toMatchObject({ kind: 'read-back', label: `${l1} as read back`, joints: 1 })
    const [group] = view.groups
    expect(group.values).toMatchObject([{ parameter: 'velocityGain', a: { origin: 'family' }, b: { origin: null } }])
    expect(Math.floor(Number(group.values[0].b!.value))).toBe(5)
    expect(group.registers.map((r) => [r.address, r.what])).toEqual([[0x24, 'Velocity gain'], [0x5d, 'no register']])
    expect(group.own).toEqual([])
    expect((await w.observer.get('/api/compare?a=release:dunlin@1.1.0&b=read-back:999999').expect(404)).body.errors).toMatchObject([{ pointer: '/b' }])
  })
})
