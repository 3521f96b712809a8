import type { EncodedImage } from '../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../shared/registers/parameter-schema.ts'

/** Bytes that lie together, from a load address on. */
export interface Run {
  readonly address: number
  readonly bytes: Uint8Array
}

/**
 * What HEX and S-record carry: the image's words at their load addresses; gaps only with `writeGaps`; never the bytes
 * of read-only or write-only registers.
 */
export function imageRuns(schema: ParameterSchema, encoded: EncodedImage): Run[] {
  const { base, length, loadAddress, writeGaps } = schema.image
  const carried = new Uint8Array(length).fill(writeGaps ? 1 : 0)
  for (const word of schema.words) carried.fill(word.access === 'rw' ? 1 : 0, word.address - base, word.address - base + word.bytes)
  const runs: Run[] = []
  for (let at = 0; at < length; ) {
    let end = at
    while (end < length && carried[end] === carried[at]) end += 1
    if (carried[at] === 1) runs.push({ address: loadAddress + at, bytes: encoded.image.subarray(at, end) })
    at = end
  }
  return runs
}

/** Runs cut into pieces of at most `size` bytes; no piece crosses a multiple of `border`. */
export function* pieces(runs: readonly Run[], size: number, border: number): Generator<Run> {
  for (const run of runs) {
    for (let at = 0; at < run.bytes.length; ) {
      const address = run.address + at
      const end = Math.min(at + size, run.bytes.length, at + border - (address % border))
      yield { address, bytes: run.bytes.subarray(at, end) }
      at = end
    }
  }
}
