import { createHash } from 'node:crypto'
import { Readable } from 'node:stream'
import { firmwareImageLimit } from '../../shared/contract/firmware.ts'
import type { FileStore } from '../db/file-store.ts'
import type { FirmwareImage } from '../modules/firmware/firmware-version.entity.ts'

const size = 24 * 1024

/** Bytes that stand for a firmware in the demo, the same every time for the same name. They run on nothing, and say so at their start. */
function demoBytes(name: string): Buffer {
  const parts = [Buffer.from(`Detent demo, ${name}: not a firmware\n`)]
  for (let k = 0, length = parts[0].length; length < size; k += 1) {
    const block = createHash('sha256').update(`${name} ${k}`).digest()
    parts.push(block)
    length += block.length
  }
  return Buffer.concat(parts).subarray(0, size)
}

/** Keeps a firmware image for a version of the demo, as an upload would. */
export async function demoFirmwareImage(files: FileStore, line: string, version: string): Promise<FirmwareImage> {
  const received = await files.receive(Readable.from([demoBytes(`${line} ${version}`)]), firmwareImageLimit)
  await files.keep(received)
  await received.discard()
  return { sha256: received.sha256, bytes: received.bytes, format: 'bin', name: `${line}-${version}-demo.bin` }
}
