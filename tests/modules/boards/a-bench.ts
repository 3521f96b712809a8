import { BoardEvent } from '../../../server/modules/boards/board-event.entity.ts'
import { Person } from '../../../server/modules/people/person.entity.ts'
import { Release } from '../../../server/modules/releases/release.entity.ts'
import { withdrawRelease } from '../../../server/modules/releases/withdraw-release.ts'
import type { BoardView, Dump } from '../../../shared/contract/boards.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { aFirmware } from '../../support/a-firmware.ts'
import { aMachine, aRelease } from '../../support/a-release.ts'
import { hingeSchema, twoKnees } from '../../support/a-walker.ts'
import { aWorkplace, type SignedIn, type Workplace } from '../../support/workplace.ts'

export interface Bench extends Workplace {
  builder: SignedIn
  other: SignedIn
  manager: SignedIn
  observer: SignedIn
}

/** The knees of the demo, measured on H-0270 and H-0285, with another velocity gain. */
export function kneesWith(velocityGain: number, boards: { l1?: string; r1?: string } = {}): MachineSet {
  const set = twoKnees()
  set.families.knee.values.velocityGain = velocityGain
  if (boards.l1) set.joints['l1-knee'].board = boards.l1
  if (boards.r1) set.joints['r1-knee'].board = boards.r1
  return set
}

export const l1 = twoKnees().joints['l1-knee'].board!
export const r1 = twoKnees().joints['r1-knee'].board!

/** Dunlin with two knees, releases 1.0.0 (velocity gain 3.2) and 1.1.0 (3.4), and people at the bench. */
export async function aBench(): Promise<Bench> {
  const w = await aWorkplace()
  await aMachine(w)
  await aMachine(w, 'teasel')
  await aFirmware(w, { schema: hingeSchema() })
  await aRelease(w, { version: '1.0.0', set: kneesWith(3.2) })
  await aRelease(w, { version: '1.1.0', set: kneesWith(3.4) })
  return { ...w, builder: await w.as([['builder', 'dunlin']]), other: await w.as([['builder', null]]), manager: await w.as([['release manager', 'dunlin']]), observer: await w.as([['observer', 'dunlin']]) }
}

/** A file of a release as a builder downloads it. */
export async function fileOf(person: SignedIn, version: string, joint: string, format = 'bin'): Promise<Buffer> {
  const { body } = await person.get(`/api/machines/dunlin/releases/${version}/joints/${joint}/image.${format}?reason=compared+in+a+test`).buffer(true).parse((res, done) => {
    const parts: Buffer[] = []
    res.on('data', (part: Buffer) => parts.push(part))
    res.on('end', () => done(null, Buffer.concat(parts)))
  }).expect(200)
  return body as Buffer
}

export const dumpOf = (bytes: Uint8Array | string, fileName = 'board.bin'): Dump => ({ fileName, content: Buffer.from(bytes).toString('base64') })

export const flash = (person: SignedIn, body: { serial: string; joint?: string; release?: string; readBack?: Dump }) => person.post('/api/machines/dunlin/flashes', { joint: 'l1-knee', release: '1.1.0', ...body })

export async function readBoard(person: SignedIn, serial: string): Promise<BoardView> {
  return (await person.get(`/api/boards/${serial}`).expect(200)).body as BoardView
}

export const eventsOf = (w: Workplace) => w.orm.em.fork().find(BoardEvent, {}, { orderBy: { id: 'asc' }, populate: ['board', 'release', 'joint', 'from', 'dump'] })

/** Withdraws a release by its act; the releases of this bench were put into the database without a change, which the route's answer would show. */
export const withdraw = (w: Bench, version: string, reason = 'Hums at 41 Hz.') =>
  w.orm.em.fork().transactional(async (em) =>
    withdrawRelease(em, await em.findOneOrFail(Release, { version }, { populate: ['machine'] }), { reason, person: await em.findOneOrFail(Person, { id: w.manager.me.id }), now: w.services.now() }),
  )
