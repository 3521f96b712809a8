import type { EntityManager } from '@mikro-orm/core'
import { JointSettings } from '../../../shared/parameters/machine-set.ts'
import { isExportFormat, EXPORT_FORMATS, writeExport, type ExportFormat } from '../../exports/export-file.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { problemsOf } from '../../http/validate.ts'
import { TOOL_VERSION } from '../../tool-version.ts'
import { sameSerial } from '../boards/board.entity.ts'
import { recordBenchSet } from '../boards/record-bench-set.ts'
import type { Speaker } from '../boards/speaker.ts'
import type { Change } from '../changes/change.entity.ts'
import { changeKey } from '../changes/locate.ts'
import { inState } from '../changes/permissions.ts'
import { setOf } from '../changes/read-set.ts'
import { checkChange } from '../checks/check-change.ts'
import { resolveJoint, sha256 } from '../checks/resolve-joint.ts'
import { splitFirmwareName } from '../firmware/firmware-authors.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { Joint } from '../machines/joint.entity.ts'
import { Machine } from '../machines/machine.entity.ts'
import { differencesFound } from './prove-image.ts'
import type { TakenFile } from './take-file.ts'

export interface BenchWish {
  joint: string
  /** serial number of the one board it is for */
  board: string
  format: string
}

interface Wanted {
  joint: string
  board: string
  format: ExportFormat
}

const field = (pointer: string, detail: string) => ({ fields: [{ pointer, detail }] })

/** The wish with its names checked against the draft. */
function wanted(change: Change, { joint, board, format }: BenchWish): Wanted {
  if (!isExportFormat(format)) throw new DomainError('invalid-request', `Images come as ${EXPORT_FORMATS.join(', ')}. Nothing was handed out.`, field('/format', 'is no format'))
  if (!Object.hasOwn(setOf(change.text).joints, joint)) throw new DomainError('invalid-request', `Change ${changeKey(change)} has no joint "${joint}". Nothing was handed out.`, field('/joint', 'is no joint of the change'))
  if (problemsOf(JointSettings.properties.board, board).length > 0) throw new DomainError('invalid-request', 'Name the one board it is for, by its serial number. Nothing was handed out.', field('/board', 'is no serial number: letters, digits, point, hyphen, underscore'))
  return { joint, board, format }
}

/** Who may have it, and of which change. @throws DomainError not-permitted, wrong-state */
function mustBeAuthors(change: Change, speaker: Speaker) {
  if (!change.writers.includes(speaker.person.id)) throw new DomainError('not-permitted', `Bench images of change ${changeKey(change)} are for those who write in it. Nothing was handed out; ${change.author.name} is the author.`, { recorded: true })
  const open = inState(change, 'draft', 'submitted', 'approved')
  if (!open.allowed) throw new DomainError('wrong-state', `${open.why} ${change.state === 'released' ? 'Take the image of its release.' : 'Nothing is to be tried of it any more.'} Nothing was handed out.`)
}

/** @throws DomainError check-blocks, naming each block */
async function mustNotBlock(services: Services, em: EntityManager, change: Change) {
  const { result } = await checkChange(services, em, change)
  const blocks = result.findings.filter((f) => f.level === 'block')
  if (blocks.length > 0)
    throw new DomainError('check-blocks', `The check blocks change ${changeKey(change)}: ${blocks[0].text} Nothing was handed out; a board is tried only with numbers that nothing blocks.`, { fields: blocks.map((f) => ({ pointer: f.pointer ?? '', detail: f.text })), extra: { findings: blocks } })
}

/** The file itself, release number 0, marked in name and header, proven by the second decoder. */
async function makeFile(em: EntityManager, change: Change, { joint, board, format }: Wanted): Promise<TakenFile & { imageSha256: string }> {
  const set = setOf(change.text)
  const settings = set.joints[joint]
  if (settings.board !== undefined && !sameSerial(settings.board, board))
    throw new DomainError('wrong-state', `The draft holds values that were measured on board ${settings.board}, but this is for ${board}. Nothing was handed out; name ${board} in the draft, with the values measured on it.`, field('/board', `the draft's values belong to ${settings.board}`))
  const { documents, schemas } = await schemasFor(em, set)
  const resolved = resolveJoint(set, joint, new Map(Object.entries(schemas)), 0)
  if (resolved.kind === 'refused') throw new DomainError('content-invalid', `The values of ${settings.name} can't be encoded. Nothing was handed out; correct the values named.`, { fields: resolved.problems })
  const given = Object.fromEntries(resolved.values.map((v) => [v.name, v.value]))
  const [difference] = differencesFound(documents[settings.firmware], resolved.encoded.image, given, 0)
  if (difference) throw new DomainError('verification-failed', `The second decoder reads other values from the image of ${joint}: ${difference} Nothing was handed out; report this.`)
  const file = writeExport(format, resolved.schema, resolved.encoded, { machine: change.machine.key, joint, firmware: splitFirmwareName(settings.firmware), status: { kind: 'bench', board }, device: settings.address, toolVersion: TOOL_VERSION })
  return { bytes: file.bytes, type: file.mediaType, fileName: file.name, sha256: sha256(file.bytes), imageSha256: resolved.imageSha256 }
}

/**
 * An image of an unreleased change, for one board at one joint: for its writers alone, under a fresh check without blocks, marked. From here
 * on the board counts as holding a bench set until it is read back equal to a release.
 *
 * @throws DomainError not-permitted, wrong-state, invalid-request, check-blocks, content-invalid
 */
export async function takeBenchImage(services: Services, em: EntityManager, change: Change, wish: BenchWish, speaker: Speaker): Promise<TakenFile> {
  mustBeAuthors(change, speaker)
  const want = wanted(change, wish)
  const { imageSha256, ...file } = await makeFile(em, change, want)
  await mustNotBlock(services, em, change)
  await services.orm.em.fork().transactional(async (tx) => {
    const { name } = setOf(change.text).joints[want.joint]
    const machine = await tx.findOneOrFail(Machine, { id: change.machine.id })
    // a joint that was never released has no place of its own yet
    const joint = (await tx.findOne(Joint, { machine, key: want.joint })) ?? tx.create(Joint, { machine, key: want.joint, name, createdAt: speaker.now })
    await appendEntry(tx, { at: speaker.now, person: speaker.person, act: 'bench image taken', subject: { machine: change.machine.key, change: changeKey(change), joint: want.joint, board: want.board }, details: { format: want.format, sha256: file.sha256, imageSha256 } })
    await recordBenchSet(tx, { machine, joint, serial: want.board, change: changeKey(change), imageSha256 }, speaker)
  })
  return file
}
