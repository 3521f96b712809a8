import { BoardTable, CompareDump, ImportBoards, ReadBoardBack, RecordFlash, RecordMachine, RetireBoard, SeatBoard, type DumpComparison } from '../../../shared/contract/boards.ts'
import { route, type Call, type Place, type RouteSpec } from '../../http/route.ts'
import { onMachine } from '../machines/locate.ts'
import { Machine } from '../machines/machine.entity.ts'
import { may } from '../people/permissions.ts'
import { onRelease } from '../releases/locate.ts'
import { Board } from './board.entity.ts'
import { compareDump } from './compare-dump.ts'
import { exportBoards } from './export-boards.ts'
import { importBoards } from './import-boards.ts'
import { findBoard, jointNamed, onBoard, releaseNamed } from './locate.ts'
import { presentBenchTasks } from './present-bench-tasks.ts'
import { presentCard } from './present-card.ts'
import { presentJointBoards } from './present-joint-boards.ts'
import { presentMachineBoards } from './present-machine-boards.ts'
import { presentBoard, presentBoards } from './present.ts'
import { previewImport } from './preview-import.ts'
import { recordFlash } from './record-flash.ts'
import { recordMachine } from './record-machine.ts'
import { retireBoard } from './retire-board.ts'
import { seatBoard } from './seat-board.ts'
import type { Speaker } from './speaker.ts'
import { prepareReadBack, verifyReadBack } from './verify-read-back.ts'

type Asking = Pick<Call<unknown, Place>, 'em' | 'held' | 'query'>

/** Boards on the machines that the person may read, retired ones only when asked for. */
async function readable({ em, held, query }: Asking): Promise<Board[]> {
  const machines = (await em.find(Machine, query.machine ? { key: query.machine } : {})).filter((m) => may(held, 'read', m.key).allowed)
  const where = { machine: { $in: machines.map((m) => m.id) }, ...(query.retired === 'yes' ? {} : { retiredAt: null }), ...(query.release ? { release: { version: query.release } } : {}) }
  return (await em.find(Board, where, { populate: ['machine', 'joint', 'imageOf'] })) as Board[]
}

const speakerOf = ({ person, held, benchKey, now }: Pick<Call<unknown, Place>, 'person' | 'held' | 'benchKey' | 'now'>): Speaker => ({ person, held, benchKey, now })

export const boardRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/boards',
    query: { machine: { description: 'one machine, by its key', example: 'dunlin' }, release: { description: 'version of the release held' }, retired: { description: 'yes: retired boards too' } },
    summary: 'list boards',
    access: 'signed-in',
    benchKey: true,
    async handle(call) {
      const machines = await call.em.find(Machine, { retiredAt: null })
      return { body: { boards: await presentBoards(call.em, await readable(call)), mayRecordOn: machines.filter((m) => may(call.held, 'record flashes', m.key).allowed).map((m) => m.key) } }
    },
  }),
  route({
    method: 'get',
    path: '/boards.csv',
    query: { machine: { description: 'one machine, by its key', example: 'dunlin' }, release: { description: 'version of the release held' }, retired: { description: 'yes: retired boards too' } }, gives: 'text/csv',
    summary: 'export boards',
    access: 'signed-in',
    costly: true,
    benchKey: true,
    async handle(call) {
      const text = exportBoards(await presentBoards(call.em, await readable(call)))
      return { bytes: new TextEncoder().encode(text), type: 'text/csv; charset=utf-8', fileName: call.query.machine ? `boards-${call.query.machine}.csv` : 'boards.csv' }
    },
  }),
  route({ method: 'get', path: '/bench-tasks', summary: 'list what waits at the bench', access: 'signed-in', benchKey: true, handle: async ({ em, held }) => ({ body: await presentBenchTasks(em, held) }) }),
  route({ method: 'get', path: '/boards/:serial', summary: 'read a board', access: 'read', place: onBoard, benchKey: true, handle: async ({ em, place, held }) => ({ body: await presentBoard(em, place.board, held) }) }),
  route({ method: 'get', path: '/machines/:machine/boards', summary: 'read the boards of a machine', access: 'read', place: onMachine, benchKey: true, handle: async ({ em, place, held }) => ({ body: await presentMachineBoards(em, place.found, held) }) }),
  route({ method: 'get', path: '/machines/:machine/joints/:joint/boards', summary: 'read the boards of a joint', access: 'read', place: onMachine, benchKey: true, handle: async ({ em, place, params }) => ({ body: await presentJointBoards(em, place.found, params.joint) }) }),
  route({
    method: 'get',
    path: '/machines/:machine/releases/:version/joints/:joint/card',
    summary: 'read a bench card',
    access: 'read',
    place: onRelease,
    benchKey: true,
    handle: async ({ em, place, params, held, services }) => ({ body: await presentCard(em, place.release, params.joint, { held, baseUrl: services.config.baseUrl }) }),
  }),
  route({
    method: 'post',
    path: '/machines/:machine/joints/:joint/compare-dump',
    summary: 'compare a dump with a release',
    access: 'record flashes',
    place: onMachine,
    body: CompareDump,
    async handle({ em, place, params, body }) {
      const { result, equal } = await compareDump(em, { release: await releaseNamed(em, place.found, body.release, '/release'), joint: await jointNamed(em, place.found, params.joint, ''), dump: body.dump, pointer: '/dump' })
      return { body: { ...result, equals: equal && equal.release.version !== result.release ? equal.release.version : null } satisfies DumpComparison }
    },
  }),
  route({
    method: 'post',
    path: '/machines/:machine/flashes',
    summary: 'record a flash',
    access: 'record flashes',
    place: onMachine,
    body: RecordFlash,
    benchKey: true,
    async handle(call) {
      const { joint: key, release: version, serial, readBack: dump } = call.body
      const machine = call.place.found
      const named = async (em: typeof call.em) => ({ joint: await jointNamed(em, machine, key, '/joint'), release: await releaseNamed(em, machine, version, '/release') })
      const before = await named(call.em)
      const compared = dump ? await compareDump(call.em, { ...before, dump, pointer: '/readBack' }) : null
      return call.act(async (em) => {
        const now = await named(em)
        const board = await recordFlash(em, { machine: await em.findOneOrFail(Machine, { id: machine.id }), ...now, serial, readBack: compared && { ...compared, ...now } }, speakerOf(call))
        return { status: 201, body: await presentBoard(em, board, call.held) }
      })
    },
  }),
  route({
    method: 'post',
    path: '/machines/:machine/flashes/bulk',
    summary: 'record flashes of a whole machine',
    access: 'record flashes',
    costly: true,
    place: onMachine,
    body: RecordMachine,
    handle: (call) =>
      call.act(async (em) => {
        const machine = await em.findOneOrFail(Machine, { id: call.place.found.id })
        await recordMachine(em, { machine, release: await releaseNamed(em, machine, call.body.release, '/release'), boards: call.body.boards }, speakerOf(call))
        return { status: 201, body: await presentMachineBoards(em, machine, call.held) }
      }),
  }),
  route({
    method: 'post',
    path: '/machines/:machine/boards',
    summary: 'record where a board sits',
    access: 'record flashes',
    place: onMachine,
    body: SeatBoard,
    handle: (call) =>
      call.act(async (em) => {
        const { serial, joint, note = '' } = call.body
        const machine = await em.findOneOrFail(Machine, { id: call.place.found.id })
        const board = await seatBoard(em, { machine, joint: joint === null ? null : await jointNamed(em, machine, joint, '/joint'), serial, note }, speakerOf(call))
        return { status: 201, body: await presentBoard(em, board, call.held) }
      }),
  }),
  route({
    method: 'post',
    path: '/machines/:machine/boards/preview',
    summary: 'preview an import of boards',
    access: 'record flashes',
    costly: true,
    place: onMachine,
    body: BoardTable,
    handle: async (call) => ({ body: (await previewImport(call.em, { machine: call.place.found, text: call.body.text, speaker: speakerOf(call) })).preview }),
  }),
  route({
    method: 'post',
    path: '/machines/:machine/boards/import',
    summary: 'import boards',
    access: 'record flashes',
    costly: true,
    place: onMachine,
    body: ImportBoards,
    handle: (call) =>
      call.act(async (em) => {
        const machine = await em.findOneOrFail(Machine, { id: call.place.found.id })
        return { body: await importBoards(em, { machine, ...call.body }, speakerOf(call)) }
      }),
  }),
  route({
    method: 'post',
    path: '/boards/:serial/read-backs',
    summary: 'verify a read-back',
    access: 'record flashes',
    place: onBoard,
    body: ReadBoardBack,
    async handle(call) {
      const compared = await prepareReadBack(call.em, call.place.board, call.body)
      return call.act(async (em) => {
        const board = (await findBoard(em, call.place.board.serial))!
        await verifyReadBack(em, board, compared, speakerOf(call))
        return { status: 201, body: await presentBoard(em, board, call.held) }
      })
    },
  }),
  route({
    method: 'post',
    path: '/boards/:serial/retire',
    summary: 'retire a board',
    access: 'record flashes',
    place: onBoard,
    body: RetireBoard,
    handle: (call) =>
      call.act(async (em) => {
        const board = (await findBoard(em, call.place.board.serial))!
        await retireBoard(em, board, call.body, speakerOf(call))
        return { body: await presentBoard(em, board, call.held) }
      }),
  }),
]
