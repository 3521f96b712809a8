import { printSet } from '../../../../shared/parameters/set-text.ts'
import { schemasFor } from '../../firmware/schemas-for.ts'
import { Machine } from '../../machines/machine.entity.ts'
import { presentReleases } from '../../releases/present.ts'
import { ReleaseJoint } from '../../releases/release-joint.entity.ts'
import { Release } from '../../releases/release.entity.ts'
import type { SideKind } from '../side.ts'
import { jointsOfSet } from './set-joints.ts'

/** A release, or one joint of it: the stored images, sequence number and all. */
export const releaseSide: SideKind = {
  kind: 'release',
  label: 'releases',
  form: 'MACHINE@VERSION or MACHINE@VERSION:JOINT',
  narrows: true,
  async read(em, rest) {
    const match = /^([a-z0-9-]+)@([^:]+)(?::([a-z0-9-]+))?$/.exec(rest)
    const machine = match && (await em.findOne(Machine, { key: match[1] }))
    const release = machine && (await em.findOne(Release, { machine, version: match[2] }, { populate: ['machine', 'releasedBy'] }))
    const only = match?.[3] ?? null
    if (!release || (only !== null && !Object.hasOwn(release.set.joints, only))) return null
    const rows = await em.find(ReleaseJoint, { release }, { populate: ['joint', 'image'] })
    const images = new Map(rows.map((row) => [row.joint.key, new Uint8Array(row.image)]))
    const [{ state }] = await presentReleases(em, [release])
    const name = `${machine.name} ${release.version}`
    return {
      view: {
        ref: `release:${rest}`, kind: 'release', label: only === null ? name : `${release.set.joints[only].name} of ${name}`, note: `${state}, sequence number ${release.sequence}`,
        machine: machine.key, machineName: machine.name, release: { machine: machine.key, version: release.version }, change: null,
      },
      joints: jointsOfSet(release.set, only, (await schemasFor(em, release.set)).schemas, images),
      narrowed: only !== null,
      text: only === null ? printSet(release.set) : null,
    }
  },
  async list(em, machine) {
    const releases = await em.find(Release, { machine }, { populate: ['machine', 'releasedBy'], orderBy: { sequence: 'desc' }, limit: 500 })
    return (await presentReleases(em, releases)).map((r) => ({ ref: `release:${machine.key}@${r.version}`, label: r.version, note: `${r.state}: ${r.title}` }))
  },
}
