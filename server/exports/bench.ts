import { createPrivateKey } from 'node:crypto'
import { checkParameterSchemaText } from '../../shared/registers/check-parameter-schema.ts'
import { encodeImage } from '../../shared/registers/encode-image.ts'
import { expectParameterSchema } from '../../shared/registers/read-parameter-schema.ts'
import type { ExportContext } from './export-context.ts'
import { exportAll } from './export-file.ts'
import { jointFiles, packKit, signKit } from './kit.ts'
import { sha256 } from './record.ts'
import { verifyImage } from './verify/verify-image.ts'

/** Milliseconds from any start; given by the caller, since exports know no clock. */
export type Clock = () => number

export interface BenchFigure {
  readonly work: string
  /** Median over the runs, ms. */
  readonly milliseconds: number
  /** Limit of the design, ms. */
  readonly limit: number
  readonly runs: number
}

/** A published test key (RFC 8032 §7.1, TEST 2), in PKCS #8: it signs nothing but this bench's kit. */
const BENCH_KEY = createPrivateKey({
  key: Buffer.from(`302e020100300506032b657004220420${'4ccd089b28ff96da9db6c346ec114e0f5b8a319f35aba624da8cf6ed4fb8a6fb'}`, 'hex'),
  format: 'der',
  type: 'pkcs8',
})

const context = (joint: string): ExportContext => ({
  machine: 'Dunlin', joint, firmware: { line: 'hinge', version: '2.1.0' }, status: { kind: 'release', version: '1.7.0', sequence: 7 },
  device: 0x33, toolVersion: 'bench',
})

function median(clock: Clock, runs: number, work: () => void): number {
  const times: number[] = []
  for (let k = 0; k < runs; k += 1) {
    const start = clock()
    work()
    times.push(clock() - start)
  }
  return times.sort((a, b) => a - b)[Math.floor(runs / 2)]
}

/** Encode, second decode and every export of one joint. */
export function benchOneJoint(clock: Clock, schemaJson: unknown, runs = 200): BenchFigure {
  const schema = expectParameterSchema(schemaJson)
  const work = (): void => {
    const encoded = encodeImage(schema, {}, { release: 7 })
    if (encoded.kind === 'refused') throw new Error('the defaults of the schema do not encode')
    const verified = verifyImage({ schema: schemaJson, image: encoded.image, values: {}, release: 7 })
    if (verified.kind !== 'agrees') throw new Error('the second decoder disagrees')
    exportAll(schema, encoded, context('R3 knee'))
  }
  for (let k = 0; k < 50; k += 1) work()
  return { work: 'encode, second decode and all exports of one joint', milliseconds: median(clock, runs, work), limit: 2, runs }
}

/** A whole kit: every joint encoded, decoded again, exported; manifest, signatures, zip. */
export function benchKit(clock: Clock, schemaJson: unknown, joints = 200, runs = 3): BenchFigure {
  const schema = expectParameterSchema(schemaJson)
  const work = (): void => {
    const entries = Array.from({ length: joints }, (_, k) => {
      // 8 mA apart, so that every joint's image is its own
      const values = { currentLimit: (1000 + 8 * k) / 1000 }
      const encoded = encodeImage(schema, values, { release: 7 })
      if (encoded.kind === 'refused') throw new Error('the values of the bench do not encode')
      if (verifyImage({ schema: schemaJson, image: encoded.image, values, release: 7 }).kind !== 'agrees') throw new Error('the second decoder disagrees')
      const joint = `J${k + 1}`
      const firmware = { line: 'hinge', version: '2.1.0', schemaSha256: sha256('bench'), imageSha256: null }
      return {
        files: jointFiles(schema, encoded, context(joint)),
        entry: { joint, family: null, bus: 'fore', address: 8 + (k % 112), revision: 1, firmware, imageSha256: sha256(encoded.image), board: null },
      }
    })
    const { files, signed } = signKit({
      toolVersion: 'bench',
      release: { machine: 'Dunlin', version: '1.7.0', sequence: 7, releasedAt: '2026-11-12T13:15:00Z', contentHash: sha256('bench'), reason: 'bench' },
      signatures: [], verdicts: [], concessions: [],
      joints: entries.map(({ entry }) => entry),
      files: entries.flatMap((e) => e.files),
    }, BENCH_KEY)
    packKit(files, signed)
  }
  return { work: `kit of ${joints} joints`, milliseconds: median(clock, runs, work), limit: 1500, runs }
}

/** A schema of that many registers, as text. */
export function largeSchemaText(registers: number): string {
  const properties = Object.fromEntries(Array.from({ length: registers }, (_, k) => [`p${k}`, {
    title: `Value ${k}`, description: 'One of many.', type: 'number', minimum: 0, maximum: 8, default: 0.2, 'x-unit': 'A·s/rad',
    'x-register': { address: 4 * k, encoding: 'q7.24' },
  }]))
  return JSON.stringify({ type: 'object', 'x-image': { length: 4 * registers, addressWidth: 16 }, properties })
}

/** Text, meta-schema, registers and defaults of a large map. */
export function benchLargeMap(clock: Clock, registers = 10_000, runs = 9): BenchFigure {
  const text = largeSchemaText(registers)
  const work = (): void => {
    if (checkParameterSchemaText(text).kind !== 'schema') throw new Error('the large map is refused')
  }
  work()
  return { work: `map of ${registers} registers validated`, milliseconds: median(clock, runs, work), limit: 200, runs }
}
