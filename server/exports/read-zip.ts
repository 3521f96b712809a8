import { unzipSync } from 'fflate'
import { isSafePath } from './manifest.ts'

export interface ZipLimits {
  readonly packed: number
  /** Sum of all unpacked sizes. */
  readonly unpacked: number
  readonly entries: number
}

/** A kit of 400 joints with firmware images stays under these. */
export const KIT_LIMITS: ZipLimits = { packed: 100_000_000, unpacked: 300_000_000, entries: 20_000 }

export type ZipReading = { readonly kind: 'files'; readonly files: ReadonlyMap<string, Uint8Array> } | { readonly kind: 'refused'; readonly message: string }

class ZipRefusal extends Error {}

/**
 * Unpacks a zip within limits: sizes are judged before anything is unpacked, and an entry cannot grow past the size it
 * announces. Unsafe paths and doubles are refused.
 */
export function readZip(data: Uint8Array, limits: ZipLimits = KIT_LIMITS): ZipReading {
  if (data.length > limits.packed) return { kind: 'refused', message: `The file has ${data.length} bytes; ${limits.packed} are the most that is read.` }
  if (data[0] !== 0x50 || data[1] !== 0x4b) return { kind: 'refused', message: 'The file is no zip.' }
  const seen = new Set<string>()
  let total = 0
  try {
    const judge = (entry: { name: string; originalSize: number }): boolean => {
      if (!isSafePath(entry.name)) throw new ZipRefusal(`The entry ${JSON.stringify(entry.name.slice(0, 100))} would leave the directory or is no plain path.`)
      if (seen.has(entry.name.toLowerCase())) throw new ZipRefusal(`The entry ${entry.name} stands in the zip twice.`)
      seen.add(entry.name.toLowerCase())
      total += entry.originalSize
      if (seen.size > limits.entries) throw new ZipRefusal(`The zip has more than ${limits.entries} entries.`)
      if (total > limits.unpacked) throw new ZipRefusal(`The zip would unpack to more than ${limits.unpacked} bytes.`)
      return false
    }
    // first pass: judge the directory alone
    unzipSync(data, { filter: judge })
    return { kind: 'files', files: new Map(Object.entries(unzipSync(data))) }
  } catch (error) {
    if (error instanceof ZipRefusal) return { kind: 'refused', message: error.message }
    return { kind: 'refused', message: `The zip cannot be read: ${error instanceof Error ? error.message : String(error)}.` }
  }
}
