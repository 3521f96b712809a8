import type { EntityManager } from '@mikro-orm/core'
import { Value } from '@sinclair/typebox/value'
import { SerialNumber, type BoardTablePreview, type BoardTableRow } from '../../../shared/contract/boards.ts'
import { FirmwareName } from '../../../shared/parameters/machine-set.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { may } from '../people/permissions.ts'
import { Release } from '../releases/release.entity.ts'
import { Withdrawal } from '../releases/withdrawal.entity.ts'
import { Board, serialKey } from './board.entity.ts'
import { readBoardTable, type TypedRow } from './read-board-table.ts'
import type { Speaker } from './speaker.ts'

/** What importing one row does: nothing of it when the board stands so already. */
export interface Step {
  row: BoardTableRow
  joint: Joint | null
  release: Release | null
  firmware: string | null
  seats: boolean
  flashes: boolean
}

interface Known {
  machine: Machine
  boards: ReadonlyMap<string, Board>
  joints: ReadonlyMap<string, Joint>
  releases: ReadonlyMap<string, Release>
  sitting: ReadonlyMap<number, Board>
  /** ids of releases */
  withdrawn: ReadonlySet<number>
  speaker: Speaker
}

function problemOf(typed: TypedRow, k: Known): string | null {
  const board = k.boards.get(serialKey(typed.serial))
  const release = typed.release === '' ? null : k.releases.get(typed.release)
  const joint = typed.joint === '' ? null : k.joints.get(typed.joint)
  if (!Value.Check(SerialNumber, typed.serial)) return 'is no serial number: letters, digits, point, dash and underscore, at most 40, beginning with a letter or digit'
  if (typed.machine !== '' && typed.machine !== k.machine.key) return `belongs to another machine; this import is for ${k.machine.key}`
  if (joint === undefined) return `${k.machine.name} has no joint "${typed.joint.slice(0, 40)}"`
  if (release === undefined) return `${k.machine.name} has no release "${typed.release.slice(0, 40)}"`
  if (board?.retiredAt) return 'is retired'
  if (board && board.machine.id !== k.machine.id && !may(k.speaker.held, 'record flashes', board.machine.key).allowed) return 'is on record elsewhere, where you may not record'
  if (typed.firmware !== '' && !Value.Check(FirmwareName, typed.firmware)) return 'its firmware is no line and version, such as "hinge 2.1.0"'
  if (release) {
    const image = joint ?? board?.imageOf
    if (!image) return 'name the joint whose image of the release it holds'
    const settings = release.set.joints[image.key]
    if (!settings) return `${release.version} has no joint "${image.key}"`
    if (typed.firmware !== '' && typed.firmware !== settings.firmware) return `${release.version} is for ${settings.firmware} at this joint, not ${typed.firmware}`
    if (!joint && board?.release?.id !== release.id) return 'a flash is recorded at a joint; name it'
  }
  return null
}

function stepOf(typed: TypedRow, k: Known): Step {
  const problem = problemOf(typed, k)
  const row: BoardTableRow = { line: typed.line, serial: typed.serial, joint: typed.joint || null, release: typed.release || null, firmware: typed.firmware || null, does: [], problem }
  const joint = k.joints.get(typed.joint) ?? null
  const release = k.releases.get(typed.release) ?? null
  const board = k.boards.get(serialKey(typed.serial))
  const firmware = typed.firmware || null
  if (problem !== null) return { row, joint, release, firmware, seats: false, flashes: false }
  const seats = !board || board.machine.id !== k.machine.id || (board.joint?.id ?? null) !== (joint?.id ?? null)
  const flashes = release !== null && joint !== null && (board?.release?.id !== release.id || board.imageOf?.id !== joint.id)
  if (!board) row.does.push(joint ? `new, at ${joint.name}` : 'new, at no joint')
  else if (seats) row.does.push(`moves from ${board.joint?.name ?? 'no joint'} to ${joint?.name ?? 'no joint'}`)
  const sitting = joint && k.sitting.get(joint.id)
  if (seats && sitting && sitting.id !== board?.id) row.does.push(`${sitting.serial} leaves ${joint.name}`)
  if (flashes) row.does.push(`recorded as flashed with ${release.version}${k.withdrawn.has(release.id) ? ', which is withdrawn' : ''}`)
  if (seats && !flashes && firmware !== null && firmware !== board?.firmware) row.does.push(`firmware ${firmware}`)
  if (!seats && !flashes && firmware !== null && firmware !== board?.firmware) row.problem = `holds ${board?.firmware ?? 'no firmware'} on record; firmware comes with the release that it is flashed with`
  return { row, joint, release, firmware, seats, flashes }
}

/** A serial number or joint that stands in two rows: the later one is told. */
function markDoubled(steps: readonly Step[]) {
  const serials = new Map<string, number>()
  const joints = new Map<string, number>()
  for (const { row } of steps) {
    const [s, j] = [serials.get(serialKey(row.serial)), row.joint === null ? undefined : joints.get(row.joint)]
    if (s !== undefined) row.problem ??= `stands in line ${s} already`
    else if (j !== undefined) row.problem ??= `its joint has a board in line ${j} already`
    serials.set(serialKey(row.serial), s ?? row.line)
    if (row.joint !== null) joints.set(row.joint, j ?? row.line)
  }
}

/**
 * Reads a table of a machine's boards and says what importing it would do, row by row, without doing it.
 *
 * @throws DomainError content-invalid naming the line that can't be read
 */
export async function previewImport(em: EntityManager, { machine, text, speaker }: { machine: Machine; text: string; speaker: Speaker }): Promise<{ preview: BoardTablePreview; steps: Step[] }> {
  const typed = readBoardTable(text)
  const boards = (await em.find(Board, { $or: [{ machine }, { serialKey: { $in: typed.map((t) => serialKey(t.serial)) } }] }, { populate: ['machine', 'joint', 'imageOf', 'release'] })) as Board[]
  const known: Known = {
    machine,
    speaker,
    boards: new Map(boards.map((b) => [b.serialKey, b])),
    joints: new Map((await em.find(Joint, { machine, retiredAt: null })).map((j) => [j.key, j as Joint])),
    releases: new Map((await em.find(Release, { machine })).map((r) => [r.version, r as Release])),
    withdrawn: new Set((await em.find(Withdrawal, { release: { machine } })).map((w) => w.release.id)),
    sitting: new Map(boards.flatMap((b) => (b.joint ? [[b.joint.id, b] as const] : []))),
  }
  const steps = typed.map((t) => stepOf(t, known))
  markDoubled(steps)
  const rows = steps.map((s) => s.row)
  return { steps, preview: { rows, alters: rows.filter((r) => r.problem === null && r.does.length > 0).length, problems: rows.filter((r) => r.problem !== null).length, hash: sha256(JSON.stringify(rows)) } }
}
