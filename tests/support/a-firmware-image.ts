import { Readable } from 'node:stream'
import { FirmwareVersion } from '../../server/modules/firmware/firmware-version.entity.ts'
import type { Workplace } from './workplace.ts'

/** Gives a firmware version that is there already an image, past its acts. @returns its SHA-256 */
export async function aFirmwareImage(w: Workplace, { line = 'hinge', version = '2.1.0', bytes = Buffer.from(Array.from({ length: 4096 }, (_, k) => (k * 7) & 255)) } = {}): Promise<string> {
  const received = await w.services.files.receive(Readable.from([bytes]), 10_000_000)
  await w.services.files.keep(received)
  const em = w.orm.em.fork()
  const row = await em.findOneOrFail(FirmwareVersion, { line: { key: line }, version })
  Object.assign(row, { imageSha256: received.sha256, imageBytes: bytes.length, imageFormat: 'bin', imageName: `${line}.bin` })
  await em.flush()
  return received.sha256
}
