/** Place of a fault in an uploaded file. */
export interface FileFault {
  readonly kind: 'refused'
  readonly message: string
  /** 1-based line and column for text files. */
  readonly line?: number
  readonly column?: number
  /** 0-based offset for binary files. */
  readonly byte?: number
  /** Address that the fault concerns. */
  readonly address?: number
}

/** Bytes read from a file, each at its address, in the order of the file: addresses rise and none stands twice. */
export interface LoadedBytes {
  readonly kind: 'bytes'
  readonly runs: readonly { readonly address: number; readonly bytes: Uint8Array; readonly line: number }[]
}

export type FileReading = LoadedBytes | FileFault

export const fault = (message: string, place: Omit<FileFault, 'kind' | 'message'> = {}): FileFault => ({ kind: 'refused', message, ...place })

/** Address in messages. */
export const addressText = (address: number): string => `0x${address.toString(16).toUpperCase().padStart(4, '0')}`

/** Refuses a run that goes back or lies over the one before it; null when it may follow. */
export function faultOfOrder(last: { address: number; length: number; line: number } | null, address: number, line: number): FileFault | null {
  if (!last) return null
  if (address >= last.address + last.length) return null
  if (address >= last.address) {
    return fault(`Line ${line} writes ${addressText(address)}, which line ${last.line} has written already.`, { line, address })
  }
  return fault(`Line ${line} goes back to ${addressText(address)} after ${addressText(last.address)}; addresses must rise.`, { line, address })
}

/** Lines of a text without their ends; empty lines at its end are left out. */
export function linesOf(text: string): string[] {
  const lines = text.split(/\r\n|\n|\r/)
  while (lines.length > 0 && lines[lines.length - 1].trim() === '') lines.pop()
  return lines
}

/** Value of two hex digits at a place; −1 when they are none. */
export function hexByte(line: string, at: number): number {
  const high = digit(line.charCodeAt(at))
  const low = digit(line.charCodeAt(at + 1))
  return high < 0 || low < 0 ? -1 : high * 16 + low
}

const digit = (code: number): number =>
  code >= 48 && code <= 57 ? code - 48 : code >= 65 && code <= 70 ? code - 55 : code >= 97 && code <= 102 ? code - 87 : -1

/** All bytes of a line of hex from `start` on; or the fault of its first wrong digit. */
export function hexDigits(line: string, start: number, number: number): Uint8Array | FileFault {
  if ((line.length - start) % 2 !== 0) return fault(`Line ${number} has an odd number of hex digits.`, { line: number, column: line.length })
  const bytes = new Uint8Array((line.length - start) / 2)
  for (let k = 0; k < bytes.length; k += 1) {
    const byte = hexByte(line, start + 2 * k)
    if (byte < 0) return fault(`Line ${number}, column ${start + 2 * k + 1}: ${JSON.stringify(line.slice(start + 2 * k, start + 2 * k + 2))} is no pair of hex digits.`, { line: number, column: start + 2 * k + 1 })
    bytes[k] = byte
  }
  return bytes
}
