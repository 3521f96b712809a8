import type { EntityManager } from '@mikro-orm/core'
import type { Dump } from '../../shared/contract/boards.ts'
import type { Services } from '../http/services.ts'
import { compareDump } from '../modules/boards/compare-dump.ts'
import { findBoard, jointNamed } from '../modules/boards/locate.ts'
import { recordFlash } from '../modules/boards/record-flash.ts'
import { recordMachine } from '../modules/boards/record-machine.ts'
import { retireBoard } from '../modules/boards/retire-board.ts'
import { seatBoard } from '../modules/boards/seat-board.ts'
import type { Speaker } from '../modules/boards/speaker.ts'
import { prepareReadBack, verifyReadBack } from '../modules/boards/verify-read-back.ts'
import { Change } from '../modules/changes/change.entity.ts'
import { setOf } from '../modules/changes/read-set.ts'
import { versionsNamed } from '../modules/firmware/firmware-authors.ts'
import { schemaOf } from '../modules/firmware/read-schema.ts'
import { newestRelease } from '../modules/machines/current-release.ts'
import { Machine } from '../modules/machines/machine.entity.ts'
import { heldRoles } from '../modules/people/held-roles.ts'
import { ReleaseJoint } from '../modules/releases/release-joint.entity.ts'
import type { Release } from '../modules/releases/release.entity.ts'
import { takeBenchImage } from '../modules/releases/take-bench-image.ts'
import type { Story } from './story.ts'

const [ingunn, hedda, pascoe, mirela] = ['Ingunn Veblen', 'Hedda Lindqvist', 'Pascoe Adeyemi', 'Mirela Castanho']

interface AtBench {
  em: EntityManager
  machine: Machine
  release: Release
  speaker: Speaker
}

/** What happens at a machine's bench, each act by its person and against the newest release there is at that moment. */
class Bench {
  private readonly story: Story
  private readonly machine: string

  constructor(story: Story, machine: string) {
    this.story = story
    this.machine = machine
  }

  private act<T>(by: string, work: (at: AtBench) => Promise<T>): Promise<T> {
    return this.story.act(async (em, now) => {
      const person = await this.story.person(em, by)
      const machine = await em.findOneOrFail(Machine, { key: this.machine })
      return work({ em, machine, release: (await newestRelease(em, machine))!, speaker: { person, held: await heldRoles(em, person), benchKey: null, now } })
    })
  }

  /** Every joint but those left out gets the release, on the board that its values were measured on. */
  flashAll(by: string, but: readonly string[] = []) {
    return this.act(by, ({ em, machine, release, speaker }) => {
      const boards = Object.entries(release.set.joints).flatMap(([joint, j]) => (but.includes(joint) ? [] : [{ joint, serial: j.board! }]))
      return recordMachine(em, { machine, release, boards }, speaker)
    })
  }

  /** One flash, with its read-back. */
  flashAndReadBack(by: string, key: string) {
    return this.act(by, async ({ em, machine, release, speaker }) => {
      const joint = await jointNamed(em, machine, key, '/joint')
      const readBack = await compareDump(em, { release, joint, dump: await dumpOf(em, release, key), pointer: '/readBack' })
      await recordFlash(em, { machine, joint, release, serial: release.set.joints[key].board!, readBack }, speaker)
    })
  }

  /** A read-back in which one bit of the bus address has flipped. */
  readBackWithFlippedAddress(by: string, key: string, bit: number) {
    return this.act(by, async ({ em, release, speaker }) => {
      const settings = release.set.joints[key]
      const [version] = await versionsNamed(em, [settings.firmware])
      const { schema } = schemaOf(version)
      const at = schema.byRole.get('bus.address')!.register!.address - schema.image.base
      const board = (await findBoard(em, settings.board!))!
      const compared = await prepareReadBack(em, board, { dump: await dumpOf(em, release, key, (bytes) => void (bytes[at] ^= 1 << bit)) })
      await verifyReadBack(em, board, compared, speaker)
    })
  }

  /** An author tries an unreleased change on the joint's own board. */
  async tryUnreleased(services: Services, by: string, title: string, joint: string) {
    const { now } = this.story
    const em = services.orm.em.fork()
    const person = await this.story.person(em, by)
    const change = (await em.findOneOrFail(Change, { machine: { key: this.machine }, title }, { populate: ['machine', 'author', 'baseRelease'] })) as Change
    await takeBenchImage({ ...services, now: () => now }, em, change, { joint, board: setOf(change.text).joints[joint].board!, format: 'hex' }, { person, held: await heldRoles(em, person), benchKey: null, now })
  }

  seat(by: string, serial: string, joint: string | null, note: string) {
    return this.act(by, async ({ em, machine, speaker }) => seatBoard(em, { machine, joint: joint === null ? null : await jointNamed(em, machine, joint, '/joint'), serial, note }, speaker))
  }

  retire(by: string, serial: string, reason: string) {
    return this.act(by, async ({ em, speaker }) => retireBoard(em, (await findBoard(em, serial))!, { serial, reason }, speaker))
  }
}

/** A release's image of a joint as a board that holds it reads back. */
async function dumpOf(em: EntityManager, release: Release, joint: string, alter: (bytes: Uint8Array) => void = () => {}): Promise<Dump> {
  const row = await em.findOneOrFail(ReleaseJoint, { release, joint: { key: joint } }, { populate: ['image'] })
  const bytes = new Uint8Array(row.image)
  alter(bytes)
  return { fileName: `${release.set.joints[joint].board!.toLowerCase()}-read-back.bin`, content: Buffer.from(bytes).toString('base64') }
}

const legs = ['l1', 'r1', 'l2', 'r2', 'l3', 'r3']
const leftBehind = ['r3-yaw', 'r3-hip']

/** What was done at the bench after each of Dunlin's releases, by version. */
const dunlin: Record<string, (bench: Bench) => Promise<unknown>> = {
  '1.0.0': (b) => b.flashAll(ingunn),
  '1.1.0': (b) => b.flashAll(pascoe),
  // flashed to the hind legs before its hum was heard; two boards were never flashed again
  '1.2.0': async (b) => {
    for (const joint of ['l3-hip', ...leftBehind]) await b.flashAndReadBack(pascoe, joint)
  },
  '1.3.0': (b) => b.flashAll(ingunn, leftBehind),
  '1.3.1': (b) => b.flashAll(pascoe, leftBehind),
  '1.4.0': async (b) => {
    await b.flashAll(ingunn, [...leftBehind, 'r1-hip'])
    for (const leg of legs) await b.flashAndReadBack(ingunn, `${leg}-knee`)
    for (const joint of ['l1-hip', 'r2-hip', 'winch']) await b.flashAndReadBack(pascoe, joint)
  },
}

/** Told after a release of Dunlin was made. */
export const afterRelease = async (story: Story, version: string): Promise<void> => void (await dunlin[version](new Bench(story, 'dunlin')))

/** How the boards of both machines come to stand as they do today. */
export async function boardsStory(story: Story, services: Services): Promise<void> {
  const walker = new Bench(story, 'dunlin')
  await walker.readBackWithFlippedAddress(pascoe, 'r2-hip', 3)
  await walker.tryUnreleased(services, mirela, 'Stiffer knee for soft mud', 'l2-knee')
  await walker.retire(hedda, 'H-0325', 'Connector torn out on the mud flat; kept for parts.')
  await walker.seat(ingunn, 'H-0361', 'l2-yaw', 'swapped: the old board lost its encoder supply')
  await walker.seat(ingunn, 'H-0362', null, 'spare')

  const arm = new Bench(story, 'teasel')
  await arm.flashAll(hedda, ['pitch'])
  for (const joint of ['turn', 'shoulder', 'belt']) await arm.flashAndReadBack(ingunn, joint)
  await arm.seat(hedda, 'H-0409', null, 'spare; the arm keeps its boards, so that its kit can be taken as a whole')
}
