import { createHash } from 'node:crypto'
import type { EncodedImage } from '../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../shared/registers/parameter-schema.ts'
import { BENCH_MARK, EXPORTER_VERSION, hex, hexBytes, releaseNumber, type ExportContext } from './export-context.ts'

export const sha256 = (data: Uint8Array | string): string => createHash('sha256').update(data).digest('hex')

/** Machine-readable record of one joint's set and image: keys in a fixed order, numbers as they were typed. */
export function writeRecord(schema: ParameterSchema, encoded: EncodedImage, context: ExportContext): string {
  const { status } = context
  const { image } = schema
  const digits = image.addressWidth / 4
  const address = (value: number): string => `0x${hex(value, digits)}`
  const record = {
    record: 'detent register image',
    form: EXPORTER_VERSION,
    tool: { name: 'Detent', version: context.toolVersion },
    machine: context.machine,
    joint: context.joint,
    device: `0x${hex(context.device, 2)}`,
    firmware: context.firmware,
    status: status.kind === 'release' ? { release: status.version, sequence: status.sequence }
      : status.kind === 'bench' ? { bench: BENCH_MARK, board: status.board } : { unreleased: true },
    image: {
      base: address(image.base), length: image.length, loadAddress: `0x${hex(image.loadAddress, 8)}`, fill: image.fill,
      releaseNumber: releaseNumber(context),
      checksum: image.checksum ? { algorithm: image.checksum.algorithm, value: `0x${hex(encoded.checksum ?? 0, image.checksum.bytes * 2)}` } : null,
      sha256: sha256(encoded.image),
      bytes: hexBytes(encoded.image),
    },
    registers: encoded.rows.map((row) => ({
      parameter: row.parameter, title: row.title, address: address(row.address), access: row.access, encoding: row.encoding,
      ...(row.bit === null ? {} : { bit: row.bit, width: row.width }),
      bytes: hexBytes(row.bytes), raw: row.raw, typed: row.typed, value: row.physical, unit: row.unit,
      roundingError: { absolute: row.errorAbsolute, relative: row.errorRelative },
    })),
    words: encoded.words.filter((word) => word.kind !== 'parameter').map((word) => ({ is: word.kind, address: address(word.address), bytes: hexBytes(word.bytes) })),
  }
  return `${JSON.stringify(record, null, 2)}\n`
}
