import { encodeImage } from '../../../../shared/registers/encode-image.ts'
import { splitFirmwareName, versionsNamed } from '../../firmware/firmware-authors.ts'
import { schemaOf } from '../../firmware/read-schema.ts'
import { Joint } from '../../machines/joint.entity.ts'
import { Machine } from '../../machines/machine.entity.ts'
import { Revision } from '../../releases/revision.entity.ts'
import { hexAddress, type SideKind } from '../side.ts'

/** A revision of one joint; release number 0 in its image, as in the hash it was signed by. */
export const revisionSide: SideKind = {
  kind: 'revision',
  label: 'revisions',
  form: 'MACHINE/JOINT@rN',
  narrows: false,
  async read(em, rest) {
    const match = /^([a-z0-9-]+)\/([a-z0-9-]+)@r(\d{1,9})$/.exec(rest)
    const machine = match && (await em.findOne(Machine, { key: match[1] }))
    const joint = machine && (await em.findOne(Joint, { machine, key: match[2] }))
    const revision = joint && (await em.findOne(Revision, { joint, number: Number(match[3]) }))
    if (!revision) return null
    const { content } = revision
    const [version] = await versionsNamed(em, [content.firmware])
    const schema = version && schemaOf(version).schema
    if (!schema) return null
    const encoded = encodeImage(schema, Object.fromEntries(content.values.map((v) => [v.name, v.value])), { release: 0 })
    return {
      view: {
        ref: `revision:${rest}`, kind: 'revision', label: `${joint.name} r${revision.number}`, note: `${machine.name}, ${splitFirmwareName(content.firmware).line}`,
        machine: machine.key, machineName: machine.name, release: null, change: null,
      },
      joints: [{
        key: joint.key,
        name: joint.name,
        settings: { family: content.family, bus: content.bus, address: hexAddress(content.address), firmware: content.firmware, board: content.board ?? '' },
        driveTrain: content.driveTrain,
        schema,
        values: new Map(content.values.map((v) => [v.name, { value: v.value, origin: v.origin }])),
        image: encoded.kind === 'refused' ? null : encoded.image,
        problem: encoded.kind === 'refused' ? encoded.problems[0].message : null,
      }],
      narrowed: true,
      text: null,
    }
  },
  async list(em, machine) {
    const revisions = await em.find(Revision, { joint: { machine } }, { populate: ['joint'], fields: ['number', 'createdAt', 'joint.key', 'joint.name'], orderBy: [{ joint: { key: 'asc' } }, { number: 'desc' }], limit: 5000 })
    return revisions.map((r) => ({ ref: `revision:${machine.key}/${r.joint.key}@r${r.number}`, label: `${r.joint.name} r${r.number}`, note: r.createdAt.toISOString().slice(0, 10) }))
  },
}
