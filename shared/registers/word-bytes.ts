export type ByteOrder = 'little' | 'big'

/** Bytes of an unsigned word, in the register's byte order. */
export function wordBytes(word: number, length: number, order: ByteOrder): Uint8Array {
  const bytes = new Uint8Array(length)
  for (let k = 0; k < length; k += 1) bytes[order === 'little' ? k : length - 1 - k] = Math.floor(word / 256 ** k) & 0xff
  return bytes
}

/** Unsigned word of `length` bytes at `at`. */
export function readWord(bytes: Uint8Array, at: number, length: number, order: ByteOrder): number {
  let word = 0
  for (let k = 0; k < length; k += 1) word += bytes[at + (order === 'little' ? k : length - 1 - k)] * 256 ** k
  return word
}

/** Raw value (signed where the encoding is) to the unsigned word that holds it. */
export const rawToWord = (raw: number, bits: number): number => (raw < 0 ? raw + 2 ** bits : raw)

/** Unsigned word to the raw value as a signed encoding reads it. */
export const wordToRaw = (word: number, bits: number, signed: boolean): number =>
  signed && word >= 2 ** (bits - 1) ? word - 2 ** bits : word
