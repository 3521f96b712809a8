import { describe, expect, it } from 'vitest'
import { formatOfName, readDump, type DumpFormat } from '../../server/exports/read-dump.ts'
import { imageRuns } from '../../server/exports/image-runs.ts'
import { writeIntelHex } from '../../server/exports/intel-hex.ts'
import { writeSRecord } from '../../server/exports/s-record.ts'
import { writeWriteList } from '../../server/exports/write-list.ts'
import { encodeImage, type EncodedImage } from '../../shared/registers/encode-image.ts'
import { compareReadBack, decodeDump, type DumpImage } from '../../shared/registers/read-back.ts'
import type { ParameterValues } from '../../shared/registers/parameter-schema.ts'
import { aSchema, firmware } from '../registers/a-schema.ts'
import { randomImage, SEEDS } from './random-image.ts'

const tiny = aSchema({ a: { type: 'integer', default: 1, 'x-register': { address: 0, encoding: 'u16' } } }, { length: 8, fill: 0 })
const bytes = (text: string): Uint8Array => new TextEncoder().encode(text)

describe('refused dumps', () => {
  it.each<[DumpFormat, string, string, object]>([
    ['hex', 'a wrong checksum', ':020000000100FE\n:00000001FF\n', { line: 1, message: expect.stringMatching(/FE; its bytes give FD/) }],
    ['hex', 'a wrong length', ':030000000100FC\n:00000001FF\n', { line: 1, message: expect.stringMatching(/announces 3 data bytes and has 2/) }],
    ['hex', 'no colon', '020000000100FD\n', { line: 1, column: 1 }],
    ['hex', 'a digit that is none', ':02000000010GFD\n', { line: 1, column: 12 }],
    ['hex', 'an odd digit', ':020000000100F\n', { line: 1 }],
    ['hex', 'a type that does not exist', ':00000006FA\n', { line: 1, column: 8 }],
    ['hex', 'an end record with data', ':0100000100FE\n', { line: 1 }],
    ['hex', 'no end', ':020000000100FD\n', { line: 2 }],
    ['hex', 'data after the end', ':020000000100FD\n:00000001FF\n:0100020000FD\n', { line: 3 }],
    ['hex', 'a byte twice', ':020000000100FD\n:0100010000FE\n:00000001FF\n', { line: 2, address: 1 }],
    ['hex', 'addresses that go back', ':0100020000FD\n:0100000000FF\n:00000001FF\n', { line: 2, address: 0, message: expect.stringMatching(/goes back/) }],
    ['hex', 'data beyond the image', ':020007000100F6\n:00000001FF\n', { line: 1, address: 8 }],
    ['hex', 'data far beyond', ':020000040001F9\n:0100000000FF\n:00000001FF\n', { line: 2, address: 0x10000 }],
    ['hex', 'a second start address', ':0400000500000000F7\n:0400000300000000F9\n:020000000100FD\n:00000001FF\n', { line: 2, message: expect.stringMatching(/second start address; line 1/) }],
    ['hex', 'nothing but the end', ':00000001FF\n', { line: 1 }],
    ['srec', 'a wrong checksum', 'S10500000100FA\nS9030000FC\n', { line: 1, message: expect.stringMatching(/FA; its bytes give F9/) }],
    ['srec', 'a wrong length', 'S10600000100F8\nS9030000FC\n', { line: 1 }],
    ['srec', 'a header later', 'S10500000100F9\nS0030000FC\nS9030000FC\n', { line: 2 }],
    ['srec', 'data after the end', 'S10500000100F9\nS9030000FC\nS104000200F9\n', { line: 3 }],
    ['srec', 'a wrong count', 'S10500000100F9\nS5030002FA\nS9030000FC\n', { line: 2, message: expect.stringMatching(/counts 2 data records; there are 1/) }],
    ['srec', 'data after the count', 'S10500000100F9\nS5030001FB\nS104000200F9\nS9030000FC\n', { line: 3 }],
    ['srec', 'the reserved type', 'S40500000100F6\n', { line: 1, column: 2 }],
    ['srec', 'no end', 'S10500000100F9\n', { line: 2 }],
    ['srec', 'a byte twice', 'S10500000100F9\nS104000100FA\nS9030000FC\n', { line: 2, address: 1 }],
    ['srec', 'data beyond the image', 'S10500070100F2\nS9030000FC\n', { line: 1, address: 8 }],
    ['csv', 'no header', '0,1\n1,2\n', { line: 1 }],
    ['csv', 'a value past a byte', 'address,value\n0x00,256\n', { line: 2, address: 0 }],
    ['csv', 'hex without its mark', 'address,value\n0,1F\n', { line: 2, address: 0 }],
    ['csv', 'an address twice', 'address,value\n0,1\n0,2\n', { line: 3, address: 0 }],
    ['csv', 'an address that goes back', 'address,value\n1,1\n0,2\n', { line: 3, address: 0 }],
    ['csv', 'a missing column', 'address,value\n0\n', { line: 2 }],
    ['csv', 'a value beyond the image', 'address,value\n8,0\n', { line: 2, address: 8 }],
    ['csv', 'nothing', 'address,value\n', { line: 1 }],
    ['bin', 'a byte too many', '123456789', { byte: 8 }],
    ['bin', 'a byte too few', '1234567', { byte: 7 }],
    ['bin', 'nothing', '', { byte: 0 }],
    ['hex', 'a zip', 'PK\u0003\u0004 and more', { byte: 0, message: expect.stringMatching(/zip/) }],
    ['csv', 'a binary file', 'address,value\n\u0000\u0001', { byte: 14 }],
  ])('%s: %s', (format, _what, text, fault) => {
    expect(readDump(format, bytes(text), tiny)).toMatchObject({ kind: 'refused', ...fault })
  })

  it('a file past the size limit, and text that is no UTF-8', () => {
    expect(readDump('hex', new Uint8Array(2_000_001), tiny)).toMatchObject({ kind: 'refused' })
    expect(readDump('csv', Uint8Array.of(0x61, 0xff), tiny)).toMatchObject({ kind: 'refused', message: expect.stringMatching(/UTF-8/) })
  })
})

describe('accepted dumps', () => {
  it.each(SEEDS.slice(0, 8))('every format of seed %d decodes to its values', (seed) => {
    const { schema, encoded, values } = randomImage(seed)
    const runs = imageRuns(schema, encoded)
    const files: [DumpFormat, Uint8Array][] = [
      ['bin', encoded.image], ['hex', bytes(writeIntelHex(runs).toLowerCase().replaceAll('\n', '\r\n'))], ['srec', bytes(writeSRecord(runs, 'x'))],
      ['csv', bytes(`address,value\n${[...encoded.image].map((byte, k) => `${schema.image.base + k},0x${byte.toString(16)}\n`).join('')}`)],
    ]
    for (const [format, content] of files) {
      const dump = readDump(format, content, schema)
      if (dump.kind === 'refused') throw new Error(dump.message)
      expect(compareReadBack(schema, dump, encoded.image)).toMatchObject({ kind: 'equal', values, unexplained: [] })
    }
  })

  it('takes segment addresses (type 02) and start records (03, 05)', () => {
    const schema = aSchema({ a: { type: 'integer', 'x-register': { address: 0, encoding: 'u16' } } }, { length: 2, loadAddress: 0x10 })
    expect(readDump('hex', bytes(':020000020001FB\n:040000031234 5678E5\n'.replace(' ', '') + ':020000000100FD\n:00000001FF\n'), schema)).toMatchObject({ kind: 'dump' })
  })

  it('passes over empty lines at the end, and a byte order mark', () => {
    expect(readDump('hex', bytes('\ufeff:020000000100FD\n:00000001FF\n\n \n'), tiny)).toMatchObject({ kind: 'dump' })
    expect(readDump('hex', bytes(':020000000100FD\n\n:00000001FF\n'), tiny)).toMatchObject({ kind: 'refused', line: 2 })
  })

  it('knows a format by the name’s ending', () => {
    expect(['a.bin', 'a.HEX', 'a.s19', 'a.csv', 'a.txt', 'hex'].map(formatOfName)).toEqual(['bin', 'hex', 'srec', 'csv', null, null])
  })
})

describe('read-back', () => {
  const hinge = firmware('hinge-2.1.0')
  const made = (values: ParameterValues, release = 7): EncodedImage => {
    const encoded = encodeImage(hinge, values, { release })
    if (encoded.kind === 'refused') throw new Error(encoded.problems[0].message)
    return encoded
  }
  const whole = (image: Uint8Array): DumpImage => ({ kind: 'dump', image, present: new Uint8Array(image.length).fill(1) })
  const expected = made({ busAddress: 0x3a, velocityGain: 2.9 }).image

  it('names every differing register in units and bytes', () => {
    const result = compareReadBack(hinge, whole(made({ busAddress: 0x32, velocityGain: 2.9, controlMode: 'velocity' }).image), expected)
    expect(result.kind === 'differs' ? result.differences.map((d) => [d.kind, d.address, d.parameters.map((p) => [p.parameter, p.found, p.expected])]) : result).toEqual([
      ['parameter', 0x04, [['busAddress', 0x32, 0x3a]]],
      ['parameter', 0x05, [['controlMode', 'velocity', 'position']]],
      ['checksum', 0x7e, []],
    ])
  })

  it('lists bytes that nothing explains, decodes telemetry, compares neither', () => {
    const image = expected.slice()
    image.set([1, 2], 0x20)
    image.set([0xe8, 0x03], 0x64)
    image[0x7c] = 0
    const result = compareReadBack(hinge, whole(image), expected)
    expect(result).toMatchObject({ kind: 'equal', telemetry: { windingTemperature: 100 }, unexplained: [{ address: 0x20, bytes: Uint8Array.of(1, 2) }] })
    // the checksum runs over the gap: the finding says that the board's own would differ
    expect(result.kind === 'equal' ? result.findings.map((f) => f.code) : []).toEqual(['checksum'])
  })

  it('is incomplete when a register is missing, and names it', () => {
    const dump = whole(expected)
    dump.present.fill(0, 0x24, 0x26)
    expect(compareReadBack(hinge, dump, expected)).toMatchObject({ kind: 'incomplete', missing: [{ address: 0x24, parameters: ['velocityGain'] }], message: expect.stringMatching(/0x24–0x27 \(Velocity gain\)/) })
  })

  it('takes a dump without gaps, as the board’s HEX has none', () => {
    const dump = readDump('hex', bytes(writeIntelHex(imageRuns(hinge, made({ busAddress: 0x3a, velocityGain: 2.9 })))), hinge)
    expect(dump.kind === 'dump' && compareReadBack(hinge, dump, expected)).toMatchObject({ kind: 'equal', findings: [] })
  })

  it('shows an f32 that is no number, and a changed reserved bit', () => {
    const image = expected.slice()
    image.set([0, 0, 0xc0, 0x7f], 0x30)
    image[0x05] &= 0x7f
    const result = decodeDump(hinge, whole(image))
    expect(result.kind !== 'incomplete' ? result.findings.map((f) => f.code) : []).toEqual(['reserved-bits', 'not-a-number', 'checksum'])
    const compared = compareReadBack(hinge, whole(image), expected)
    expect(compared.kind === 'differs' ? compared.differences.map((d) => d.parameters.map((p) => p.found)) : []).toEqual([[], [undefined]])
  })

  it('a write list is a table too, once it is put in order', () => {
    const text = writeWriteList(hinge, made({}), { machine: 'Dunlin', joint: 'L1 knee', firmware: { line: 'hinge', version: '2.1.0' }, status: { kind: 'unreleased' }, device: 0x33, toolVersion: '0' })
    const [head, ...rows] = text.trim().split('\n')
    const sorted = [head, ...rows.sort((a, b) => a.split(',')[1].localeCompare(b.split(',')[1]))].join('\n')
    expect(readDump('csv', bytes(sorted), hinge).kind).toBe('dump')
    expect(readDump('csv', bytes(text), hinge)).toMatchObject({ kind: 'refused', message: expect.stringMatching(/goes back/) })
  })
})
