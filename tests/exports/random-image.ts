import type { EncodedImage } from '../../shared/registers/encode-image.ts'
import { encodeImage } from '../../shared/registers/encode-image.ts'
import type { ParameterSchema, ParameterValue } from '../../shared/registers/parameter-schema.ts'
import { aSchema, type Json } from '../registers/a-schema.ts'

/** A small seeded generator (mulberry32, public domain, from memory): the same seed gives the same images everywhere. */
export function seeded(seed: number): (below: number) => number {
  let state = seed >>> 0
  return (below) => {
    state = (state + 0x6d2b79f5) >>> 0
    let t = Math.imul(state ^ (state >>> 15), state | 1)
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61)
    return ((t ^ (t >>> 14)) >>> 0) % below
  }
}

export interface RandomImage {
  readonly schema: ParameterSchema
  readonly encoded: EncodedImage
  readonly values: Readonly<Record<string, ParameterValue>>
}

/** Random words with gaps between them, telemetry among them, anywhere in 32 bits of load addresses. */
export function randomImage(seed: number): RandomImage {
  const pick = seeded(seed)
  const length = 16 + pick(600)
  const properties: Json = {}
  const values: Record<string, ParameterValue> = {}
  for (let address = pick(4), k = 0; address + 4 <= length; k += 1) {
    const bits = [8, 16, 32][pick(3)]
    const readOnly = k > 0 && pick(6) === 0
    properties[`p${k}`] = { type: 'integer', 'x-register': { address, encoding: `u${bits}`, byteOrder: pick(2) ? 'big' : 'little', access: readOnly ? 'ro' : 'rw' } }
    if (!readOnly) values[`p${k}`] = pick(2 ** 31) % 2 ** bits
    address += bits / 8 + (pick(3) === 0 ? pick(40) : 0)
  }
  // near the borders of 64 KiB, 16 MiB and 4 GiB too
  const loadAddress = [pick(256), 0x10000 - pick(length), 0x1000000 - pick(length), 0x0801f800 + pick(9999), 2 ** 32 - length][pick(5)]
  const schema = aSchema(properties, { length, loadAddress, addressWidth: 16, fill: pick(256), writeGaps: pick(2) === 0 })
  const encoded = encodeImage(schema, values, { release: 0 })
  if (encoded.kind === 'refused') throw new Error(encoded.problems[0].message)
  return { schema, encoded, values }
}

export const SEEDS = Array.from({ length: 24 }, (_, k) => 7000 + k)
