import { describe, expect, it } from 'vitest'
import { firmwareAuthors } from '../../../server/modules/firmware/firmware-authors.ts'
import { FirmwareVersion } from '../../../server/modules/firmware/firmware-version.entity.ts'
import { schemaOf } from '../../../server/modules/firmware/read-schema.ts'
import { hashOf, keptCount, knownSchema, mostKept } from '../../../server/modules/firmware/schema-cache.ts'
import { schemasFor } from '../../../server/modules/firmware/schemas-for.ts'
import { aFirmware } from '../../support/a-firmware.ts'
import { aSet } from '../../support/a-set.ts'
import { smallSchema } from '../../support/small-schema.ts'
import { aWorkplace } from '../../support/workplace.ts'

const withFirmware = (names: Record<string, string>) => {
  const set = aSet()
  for (const [joint, firmware] of Object.entries(names)) set.joints[joint].firmware = firmware
  return set
}

describe('the schemas that a set names', () => {
  it('come as documents, as read schemas, and with their hashes', async () => {
    const w = await aWorkplace()
    await aFirmware(w)
    const found = await schemasFor(w.orm.em.fork(), aSet())
    expect(found.problems).toEqual([])
    expect(found.documents).toEqual({ 'hinge 2.1.0': smallSchema })
    expect(found.hashes).toEqual({ 'hinge 2.1.0': hashOf(smallSchema) })
    expect(found.states).toEqual({ 'hinge 2.1.0': 'published' })
    expect(found.schemas['hinge 2.1.0'].byRole.get('velocity.kp')?.name).toBe('velocityGain')
  })

  it('tell unknown, draft and retired versions joint by joint, with pointers; the schema comes all the same where there is one', async () => {
    const w = await aWorkplace()
    for (const [version, state] of [['2.1.0', 'published'], ['2.2.0', 'draft'], ['1.0.0', 'retired']] as const) await aFirmware(w, { version, state })
    const found = await schemasFor(w.orm.em.fork(), withFirmware({ 'knee-port': 'hinge 2.2.0', 'knee-starboard': 'hinge 1.0.0', 'hip-port': 'capstan 1.0.0' }))
    expect(found.problems).toMatchObject([
      { pointer: '/joints/knee-port/firmware', joint: 'knee-port', firmware: 'hinge 2.2.0', kind: 'draft' },
      { pointer: '/joints/knee-starboard/firmware', kind: 'retired' },
      { pointer: '/joints/hip-port/firmware', kind: 'unknown', text: 'There is no firmware version capstan 1.0.0; the firmware page lists every one.' },
    ])
    expect(Object.keys(found.schemas).sort()).toEqual(['hinge 1.0.0', 'hinge 2.2.0'])
  })

  it('take no version of another line', async () => {
    const w = await aWorkplace()
    await aFirmware(w, { line: 'hinge', version: '1.0.0' })
    await aFirmware(w, { line: 'capstan', version: '2.1.0' })
    const found = await schemasFor(w.orm.em.fork(), aSet())
    expect(found.problems.map((p) => p.kind)).toEqual(['unknown', 'unknown', 'unknown'])
  })

  it('are none for an empty set', async () => {
    const w = await aWorkplace()
    expect(await schemasFor(w.orm.em.fork(), { buses: {}, families: {}, joints: {} })).toEqual({ documents: {}, schemas: {}, hashes: {}, states: {}, problems: [] })
  })

  it('are refused when the stored text is not the one that its hash names', async () => {
    const w = await aWorkplace()
    const { id } = await aFirmware(w, { schema: { ...smallSchema, title: 'to be altered' } })
    await w.orm.em.getConnection().execute("update firmware_version set schema_text = replace(schema_text, 'to be altered', 'altered') where id = ?", [id])
    const version = await w.orm.em.fork().findOneOrFail(FirmwareVersion, { id }, { populate: ['line'] })
    expect(() => schemaOf(version)).toThrow('is not the one that its hash names')
  })
})

describe('schemas kept read', () => {
  it('are read once, and the longest unused goes when there are too many', () => {
    const reads: string[] = []
    const ask = (title: string) => {
      const document = { ...smallSchema, title }
      return knownSchema(hashOf(document), () => {
        reads.push(title)
        return { document, hash: hashOf(document), schema: null as never }
      })
    }
    const first = ask('kept 0')
    for (let i = 1; i < mostKept; i += 1) ask(`kept ${i}`)
    expect(ask('kept 0')).toBe(first)
    ask('one too many')
    expect(keptCount()).toBe(mostKept)
    ask('kept 0')
    ask('kept 1')
    expect(reads.filter((t) => t === 'kept 0')).toHaveLength(1)
    expect(reads.filter((t) => t === 'kept 1')).toHaveLength(2)
  })
})

describe('authors by firmware', () => {
  it('are everybody who wrote in or published the versions', async () => {
    const w = await aWorkplace()
    const writer = await w.person('Writer', [['controls engineer', null]])
    const publisher = await w.person('Publisher', [['release manager', null]])
    await aFirmware(w, { uploadedBy: writer, publishedBy: publisher })
    await aFirmware(w, { version: '2.2.0' })
    expect((await firmwareAuthors(w.orm.em.fork(), ['hinge 2.1.0', 'capstan 9.9.9'])).sort()).toEqual([writer.id, publisher.id].sort())
    expect(await firmwareAuthors(w.orm.em.fork(), [])).toEqual([])
  })
})
