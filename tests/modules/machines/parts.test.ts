import { createHash } from 'node:crypto'
import { describe, expect, it } from 'vitest'
import { ReleaseJoint } from '../../../server/modules/releases/release-joint.entity.ts'
import type { BusView, FamilyView, JointView } from '../../../shared/contract/machines.ts'
import { aMachine, aRelease } from '../../support/a-release.ts'
import { aDriveTrain, aSet } from '../../support/a-set.ts'
import { aWorkplace } from '../../support/workplace.ts'

async function released(sets = [aSet()]) {
  const w = await aWorkplace()
  for (const [i, set] of sets.entries()) await aRelease(w, { version: `1.${i}.0`, set, title: `Step ${i}` })
  return { w, observer: await w.as('observer') }
}

describe('a joint', () => {
  it('shows every effective value with its origin, what the schema says of it, and its register', async () => {
    const { observer } = await released()
    const view = (await observer.get('/api/machines/dunlin/joints/knee-port').expect(200)).body as JointView
    expect(view).toMatchObject({ machine: 'dunlin', machineName: 'Dunlin', key: 'knee-port', revision: 1, shown: { version: '1.0.0' }, problems: [], driveTrainNumber: 1, driveTrain: aDriveTrain(), busSettings: { name: 'Port legs' }, familySettings: { name: 'Knees' }, settings: { board: 'HB-0117' } })
    expect(view.values.map((v) => [v.name, v.value, v.origin])).toEqual([
      ['busAddress', 0x20, 'joint'],
      ['controlMode', 'position', 'firmware'],
      ['velocityGain', 0.4, 'joint'],
      ['currentLimit', 1.8, 'family'],
      ['encoderOffset', 0.125, 'joint'],
      ['storeCommand', 'store', 'firmware'],
      ['outerRate', 1000, 'firmware'],
    ])
    const gain = view.values[2]
    expect(gain).toMatchObject({
      title: 'Velocity gain', description: 'Proportional gain of the velocity loop.', unit: 'A·s/rad', role: 'velocity.kp', boardBound: false, minimum: 0, maximum: 8, familyValue: 0.5, firmwareDefault: 0.25,
      register: { address: 4, encoding: 'q7.24', access: 'rw', bit: null, width: null },
      // 0.4 · 2^24 = 6710886.4 → 6710886 = 0x666666, little-endian
      bytes: '66 66 66 00', physical: 6710886 / 2 ** 24,
    })
    // the board holds 0.4 of a step less: 0.4 / 2^24
    expect(gain.errorAbsolute).toBeCloseTo(0.4 / 2 ** 24, 15)
    expect(gain.errorRelative).toBeCloseTo(1 / 2 ** 24, 14)
    // 1.8 A at 0.001 A a step is 1800 = 0x0708
    expect(view.values[3]).toMatchObject({ bytes: '08 07', physical: 1.8, errorAbsolute: 0 })
    expect(view.values[4]).toMatchObject({ boardBound: true, bytes: '00 00 00 3E' })
    expect(view.values[5]).toMatchObject({ register: { access: 'wo' }, bytes: '5A' })
    expect(view.values[6]).toMatchObject({ register: null, bytes: '', physical: null })
  })

  it('shows the hash of the very image that was released', async () => {
    const { w, observer } = await released()
    const view = (await observer.get('/api/machines/dunlin/joints/hip-port').expect(200)).body as JointView
    const row = await w.orm.em.fork().findOneOrFail(ReleaseJoint, { joint: { key: 'hip-port' } }, { populate: ['image'] })
    expect(view.imageSha256).toBe(createHash('sha256').update(row.image).digest('hex'))
  })

  it('tells its revisions, newest first, each with the release that brought it', async () => {
    const [first, second, third] = [aSet(), aSet(), aSet()]
    second.joints['hip-port'].values.velocityGain = 0.3
    third.joints['hip-port'].values.velocityGain = 0.35
    third.joints['knee-port'].values.velocityGain = 0.35
    const { observer } = await released([first, second, third])
    const historyOf = async (joint: string) => ((await observer.get(`/api/machines/dunlin/joints/${joint}`).expect(200)).body as JointView).history.map((h) => [h.revision, h.release, h.sequence, h.change, h.title])
    expect(await historyOf('hip-port')).toEqual([[3, '1.2.0', 3, 'dunlin-3', 'Step 2'], [2, '1.1.0', 2, 'dunlin-2', 'Step 1'], [1, '1.0.0', 1, 'dunlin-1', 'Step 0']])
    expect(await historyOf('knee-port')).toEqual([[2, '1.2.0', 3, 'dunlin-3', 'Step 2'], [1, '1.0.0', 1, 'dunlin-1', 'Step 0']])
    expect(await historyOf('knee-starboard')).toEqual([[1, '1.0.0', 1, 'dunlin-1', 'Step 0']])
  })
})

describe('a family', () => {
  it('shows its drive train with its history, its joints, and who departs from which value', async () => {
    const [first, second] = [aSet(), aSet()]
    second.families.knee.driveTrain = aDriveTrain({ J_load: 0.005 })
    const { observer } = await released([first, second])
    const view = (await observer.get('/api/machines/dunlin/families/knee').expect(200)).body as FamilyView
    expect(view).toMatchObject({ key: 'knee', machineName: 'Dunlin', driveTrainNumber: 2, shown: { version: '1.1.0' }, settings: { name: 'Knees', driveTrain: { J_load: 0.005 } } })
    expect(view.driveTrainHistory.map((d) => [d.number, d.driveTrain.J_load])).toEqual([[2, 0.005], [1, { value: 0.004, low: 0.002, high: 0.008 }]])
    expect(view.joints.map((j) => j.key)).toEqual(['knee-port', 'knee-starboard'])
    expect(view.values).toEqual([
      { name: 'controlMode', title: 'Control mode', unit: '', role: 'control.mode', familyValue: null, firmwareDefault: 'position', own: [] },
      { name: 'velocityGain', title: 'Velocity gain', unit: 'A·s/rad', role: 'velocity.kp', familyValue: 0.5, firmwareDefault: 0.25, own: [{ joint: 'knee-port', value: 0.4 }] },
      { name: 'currentLimit', title: 'Current limit', unit: 'A', role: 'current.limit', familyValue: 1.8, firmwareDefault: 2, own: [] },
      { name: 'encoderOffset', title: 'Encoder offset', unit: 'rad', role: 'encoder.offset', familyValue: null, firmwareDefault: 0, own: [{ joint: 'knee-port', value: 0.125 }] },
      { name: 'storeCommand', title: 'Store', unit: '', role: null, familyValue: null, firmwareDefault: 'store', own: [] },
    ])
  })
})

describe('a bus', () => {
  it('shows its taps by address, what is reserved, and how many addresses are free', async () => {
    const { observer } = await released()
    const view = (await observer.get('/api/machines/dunlin/buses/port').expect(200)).body as BusView
    expect(view.taps).toEqual([
      { address: 0x20, joint: 'knee-port', name: 'Knee port', reserved: false },
      { address: 0x21, joint: 'hip-port', name: 'Hip port', reserved: false },
      { address: 0x68, joint: null, name: 'Tilt sensor', reserved: false },
    ])
    expect(view).toMatchObject({ key: 'port', doubled: [], reserved: [{ from: 0x00, to: 0x07 }, { from: 0x78, to: 0x7f }], free: 112 - 3, settings: { pullUp: 2200 } })
  })

  it('marks doubled addresses and devices at reserved ones', async () => {
    const set = aSet()
    set.joints['hip-port'].address = 0x20
    set.buses.port.otherDevices = [{ address: 0x7c, name: 'Port expander' }]
    const { observer } = await released([set])
    const view = (await observer.get('/api/machines/dunlin/buses/port').expect(200)).body as BusView
    expect(view.doubled).toEqual([0x20])
    expect(view.taps.at(-1)).toEqual({ address: 0x7c, joint: null, name: 'Port expander', reserved: true })
    expect(view.free).toBe(112 - 1)
  })
})

describe('parts that the newest release does not have', () => {
  it.each(['joints/elbow', 'families/elbow', 'buses/elbow', 'joints/constructor', 'buses/__proto__'])('are not found: %s', async (path) => {
    const { observer } = await released()
    const refused = await observer.get(`/api/machines/dunlin/${path}`).expect(404)
    expect(refused.body.detail).toMatch(/^Dunlin has no (joint|family|bus) /)
  })

  it('are not found on a machine that was never released, nor on another machine', async () => {
    const { w, observer } = await released()
    await aMachine(w, 'teasel')
    for (const path of ['joints/knee-port', 'families/knee', 'buses/port']) expect((await observer.get(`/api/machines/teasel/${path}`).expect(404)).body.detail).toMatch(/^Teasel has no/)
  })
})
