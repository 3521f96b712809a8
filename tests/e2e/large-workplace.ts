import { createHash } from 'node:crypto'
import { join } from 'node:path'
import type { EntityManager } from '@mikro-orm/core'
import { openDatabase } from '../../server/db/orm.ts'
import { Board } from '../../server/modules/boards/board.entity.ts'
import { Joint } from '../../server/modules/machines/joint.entity.ts'
import { ReleaseJoint } from '../../server/modules/releases/release-joint.entity.ts'
import { Release } from '../../server/modules/releases/release.entity.ts'
import { Revision } from '../../server/modules/releases/revision.entity.ts'
import type { JointSettings, MachineSet } from '../../shared/parameters/machine-set.ts'
import { startServer } from './server.ts'

/** A machine of so many joints with so many releases: what the pages are measured on beside the demo. */
export const large = { joints: 200, releases: 100 }

/** The set with its knees many times over, at the free addresses of each bus. */
function grown(set: MachineSet): MachineSet {
  const next = structuredClone(set)
  const taken = new Set(Object.values(next.joints).map((j) => `${j.bus} ${j.address}`))
  const places = Object.keys(next.buses).flatMap((bus) => Array.from({ length: 0x70 }, (_, i) => ({ bus, address: 8 + i }))).filter((p) => !taken.has(`${p.bus} ${p.address}`))
  const like: JointSettings = next.joints['l1-knee']
  for (let n = Object.keys(next.joints).length + 1; n <= large.joints; n += 1) next.joints[`knee-${n}`] = { ...like, ...places[n], name: `knee ${n}`, board: `HL-${n}` }
  return next
}

const inPages = async <T extends object>(rows: readonly T[], write: (page: T[]) => Promise<unknown>) => {
  for (let at = 0; at < rows.length; at += 400) await write(rows.slice(at, at + 400))
}

async function grow(em: EntityManager) {
  const [newest] = await em.find(Release, { machine: { key: 'dunlin' } }, { populate: ['machine', 'releasedBy', 'content' as never], orderBy: { sequence: 'desc' }, limit: 1 })
  const machine = newest.machine.id
  const set = grown(newest.set)
  const now = new Date()
  const known = await em.find(ReleaseJoint, { release: newest }, { populate: ['joint', 'revision', 'image' as never] })
  const like = known.find((k) => k.joint.key === 'l1-knee')!
  const added = Object.keys(set.joints).filter((key) => !known.some((k) => k.joint.key === key))
  await em.insertMany(Joint, added.map((key) => ({ machine, key, name: set.joints[key].name, createdAt: now })) as never)
  const joints = await em.find(Joint, { machine: { key: 'dunlin' }, key: { $in: added } })
  await inPages(joints.map((j) => ({ joint: j.id, number: 1, content: like.revision.content, contentHash: createHash('sha256').update(j.key).digest('hex'), createdAt: now })), (page) => em.insertMany(Revision, page as never))
  const revisions = new Map((await em.find(Revision, { joint: { $in: joints.map((j) => j.id) } })).map((r) => [r.joint.id, r.id]))
  const rows = [...known.map((k) => ({ joint: k.joint.id, revision: k.revision.id, image: k.image, imageSha256: k.imageSha256 })), ...joints.map((j) => ({ joint: j.id, revision: revisions.get(j.id)!, image: like.image, imageSha256: like.imageSha256 }))]
  for (let n = 1; n <= large.releases; n += 1) {
    const sequence = newest.sequence + n
    const id = await em.insert(Release, {
      machine, version: `2.${n}.0`, sequence, changeNumber: 1000 + n, changeTitle: `Change ${n}`, reason: newest.reason, set, content: newest.content, contentHash: createHash('sha256').update(`content ${n}`).digest('hex'),
      proposedStep: 'minor', step: 'minor', stepReason: '', releasedBy: newest.releasedBy.id, releasedAt: new Date(now.getTime() - (large.releases - n) * 60_000),
    } as never)
    await inPages(rows.map((r) => ({ release: id, ...r })), (page) => em.insertMany(ReleaseJoint, page as never))
  }
  newest.machine.lastSequence = newest.sequence + large.releases
  newest.machine.lastChange = 1000 + large.releases
  await em.flush()
  await inPages(joints.map((j) => ({ serial: `HL-${j.id}`, serialKey: `hl-${j.id}`, machine, joint: j.id, firmware: 'hinge 2.1.0', release: newest.id, imageOf: j.id, known: 'recorded', knownAt: now, knownBy: 'Pascoe Adeyemi', createdAt: now })), (page) => em.insertMany(Board, page as never))
}

/** Makes the demo workplace in an empty folder, then lets its walker grow. */
export async function fillLarge(dataDir: string): Promise<void> {
  const demo = await startServer({ DETENT_DATA: dataDir })
  await demo.stop()
  const orm = await openDatabase(join(dataDir, 'detent.sqlite'))
  try {
    await orm.em.fork().transactional(grow)
  } finally {
    await orm.close(true)
  }
}
