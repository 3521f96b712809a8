import { seeded } from './kill-points.ts'

/** Choices that a seed makes, always the same. */
export function choices(seed: number) {
  const next = seeded(seed)
  const below = (n: number) => Math.floor(next() * n)
  return { next, below, of: <T>(list: readonly T[]): T => list[below(list.length)] }
}
export type Choices = ReturnType<typeof choices>

/** Pieces that parsers have tripped over: ends, nests, numbers at their limits, names of prototypes, broken text. */
const pieces = ['', '\0', '\r\n', '\u2028', '"', '""', "'", '\\', '\\u', '\\ud800', '{', '}', '[', ']', '[[[[[[[[', '{"a":', ',', ',,', ';', '\t', ':', '::', '//', '/*', '*/', '-', '-0', '1e999', '-1e-999', '0x', 'NaN', 'Infinity', '9007199254740993', '99999999999999999999', '00000000', 'FFFFFFFF', 'S', 'S0', 'S9', ':00000001FF', '__proto__', 'constructor', 'toString', 'null', 'true', '\ufeff', '=1+1', '😀', 'PK\u0003\u0004', 'PK\u0005\u0006'].map((text) => Buffer.from(text))
const numbers = [0, 1, 0x7f, 0x80, 0xff, 0x7fff, 0xffff, 0x7fffffff, 0xffffffff]

const cut = (bytes: Buffer, from: number, to: number, put: Uint8Array) => Buffer.concat([bytes.subarray(0, from), put, bytes.subarray(to)])

/** One alteration: a bit, a byte, a piece put in or over, a part taken out, doubled, moved or repeated, a length set to a limit, or an end. */
function once(bytes: Buffer, random: Choices): Buffer {
  const at = random.below(bytes.length + 1)
  const span = 1 + random.below(Math.max(1, Math.min(64, bytes.length - at)))
  switch (random.below(9)) {
    case 0: {
      const other = Buffer.from(bytes)
      if (at < other.length) other[at] ^= 1 << random.below(8)
      return other
    }
    case 1:
      return cut(bytes, at, at + 1, Buffer.from([random.below(256)]))
    case 2:
      return cut(bytes, at, at, random.of(pieces))
    case 3:
      return cut(bytes, at, at + span, random.of(pieces))
    case 4:
      return cut(bytes, at, at + span, new Uint8Array())
    case 5:
      return cut(bytes, at, at, bytes.subarray(at, at + span))
    case 6:
      return cut(bytes, at, at, Buffer.concat(Array(1 + random.below(200)).fill(bytes.subarray(at, at + Math.min(span, 16)))))
    case 7: {
      const other = Buffer.from(bytes)
      if (at + 4 <= other.length) other.writeUInt32LE(random.of(numbers), at)
      return other
    }
    default:
      return bytes.subarray(0, at)
  }
}

/** Some alterations of a good input, as a seed draws them; now and then two good ones spliced. */
export function mutated(good: readonly Buffer[], random: Choices): Buffer {
  let bytes: Buffer = Buffer.from(random.of(good))
  if (random.next() < 0.1) {
    const other = random.of(good)
    bytes = Buffer.concat([bytes.subarray(0, random.below(bytes.length + 1)), other.subarray(random.below(other.length + 1))])
  }
  for (let n = 1 + random.below(6); n > 0; n -= 1) bytes = once(bytes, random)
  return bytes
}
