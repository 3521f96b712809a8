import { decodeImage } from '../../../../shared/registers/decode-image.ts'
import type { ParameterSchema } from '../../../../shared/registers/parameter-schema.ts'
import { formatOfName, readDump } from '../../../exports/read-dump.ts'
import { BoardEvent } from '../../boards/board-event.entity.ts'
import { versionsNamed } from '../../firmware/firmware-authors.ts'
import { schemaOf } from '../../firmware/read-schema.ts'
import { Release } from '../../releases/release.entity.ts'
import { hexAddress, type SideJoint, type SideKind } from '../side.ts'

/** What a board held when it was read back: bytes alone, so no value has an origin. */
function jointOf(key: string, name: string, settings: SideJoint['settings'], schema: ParameterSchema, dump: { bytes: Uint8Array; fileName: string }): SideJoint | null {
  const format = formatOfName(dump.fileName)
  const read = format && readDump(format, dump.bytes, schema)
  if (!read || read.kind === 'refused') return null
  const image = read.image.map((byte, k) => (read.present[k] === 1 ? byte : schema.image.fill))
  const { values } = decodeImage(schema, image)
  return { key, name, settings, driveTrain: null, schema, values: new Map(Object.entries(values).map(([parameter, value]) => [parameter, { value, origin: null }])), image, problem: null }
}

/** A read-back of a board, by the number of its entry in the board's history. */
export const readBackSide: SideKind = {
  kind: 'read-back',
  label: 'read-backs',
  form: 'NUMBER',
  narrows: false,
  async read(em, rest) {
    const event = /^\d{1,9}$/.test(rest) ? await em.findOne(BoardEvent, { id: Number(rest) }, { populate: ['board.machine', 'dump'] }) : null
    const { readBack, dump } = event ?? {}
    if (!event || !readBack || !dump) return null
    const { machine } = event.board
    const release = await em.findOne(Release, { machine, version: readBack.release })
    const settings = release?.set.joints[readBack.joint]
    const [version] = settings ? await versionsNamed(em, [settings.firmware]) : []
    if (!release || !settings || !version) return null
    const where = { family: release.set.families[settings.family].name, bus: release.set.buses[settings.bus].name, address: hexAddress(settings.address), firmware: settings.firmware, board: settings.board ?? '' }
    const joint = jointOf(readBack.joint, settings.name, where, schemaOf(version).schema, { bytes: new Uint8Array(dump), fileName: readBack.fileName })
    return joint && {
      view: {
        ref: `read-back:${rest}`, kind: 'read-back', label: `${event.board.serial} as read back`, note: `${settings.name}, against ${readBack.release}: ${readBack.verdict === 'equal' ? 'equal' : 'differs'}`,
        machine: machine.key, machineName: machine.name, release: { machine: machine.key, version: release.version }, change: null,
      },
      joints: [joint],
      narrowed: true,
      text: null,
    }
  },
  async list(em, machine) {
    const events = await em.find(BoardEvent, { board: { machine }, readBack: { $ne: null } }, { populate: ['board'], orderBy: { id: 'desc' }, limit: 500 })
    return events.flatMap(({ id, at, board, readBack }) => (readBack ? [{ ref: `read-back:${id}`, label: `${board.serial}, ${at.toISOString().slice(0, 10)}`, note: `${readBack.joint}, against ${readBack.release}: ${readBack.verdict}` }] : []))
  },
}
