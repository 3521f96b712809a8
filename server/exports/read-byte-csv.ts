import { addressText, fault, faultOfOrder, hexDigits, linesOf, type FileFault, type FileReading } from './byte-map.ts'

/** Columns that name the address and the content of a row; others are passed over. */
const ADDRESS = ['address', 'register', 'addr', 'reg']
const CONTENT = ['value', 'bytes', 'byte', 'data']

/**
 * A table of addresses and values: a header line with `address,value` (or `register,bytes`, as in a write list), then
 * one row per byte or run of bytes. Addresses: decimal or 0x…. A `value` is one byte, decimal or 0x…; `bytes` are pairs
 * of hex digits. Rows rise by address.
 */
export function readByteCsv(text: string): FileReading {
  const runs: { address: number; bytes: Uint8Array; line: number }[] = []
  let last: { address: number; length: number; line: number } | null = null
  let columns: { address: number; content: number; pairs: boolean; count: number } | null = null
  for (const [k, line] of linesOf(text.replace(/^\ufeff/, '')).entries()) {
    const number = k + 1
    if (line.trim() === '' || line.startsWith('#')) continue
    const cells = line.split(/[,;\t]/).map((cell) => cell.trim().replace(/^"(.*)"$/, '$1'))
    if (!columns) {
      const names = cells.map((cell) => cell.toLowerCase())
      const address = names.findIndex((name) => ADDRESS.includes(name))
      const content = names.findIndex((name) => CONTENT.includes(name))
      if (address < 0 || content < 0) return fault(`Line ${number} must name the columns: address,value or register,bytes.`, { line: number, column: 1 })
      columns = { address, content, pairs: names[content] === 'bytes' || names[content] === 'data', count: cells.length }
      continue
    }
    if (cells.length !== columns.count) return fault(`Line ${number} has ${cells.length} columns; the header has ${columns.count}.`, { line: number, column: 1 })
    const address = plainNumber(cells[columns.address])
    if (address === null || address > 0xffffffff) return fault(`Line ${number}: ${JSON.stringify(cells[columns.address])} is no address (decimal or 0x…).`, { line: number, column: 1 })
    const bytes = columns.pairs ? pairs(cells[columns.content], number) : oneByte(cells[columns.content], number, address)
    if (!(bytes instanceof Uint8Array)) return bytes
    const wrong = faultOfOrder(last, address, number)
    if (wrong) return wrong
    last = { address, length: bytes.length, line: number }
    runs.push({ address, bytes, line: number })
  }
  return columns ? { kind: 'bytes', runs } : fault('The table is empty.', { line: 1 })
}

function plainNumber(text: string): number | null {
  if (/^0[xX][0-9a-fA-F]{1,8}$/.test(text)) return parseInt(text.slice(2), 16)
  return /^(0|[1-9]\d{0,9})$/.test(text) ? Number(text) : null
}

function oneByte(text: string, line: number, address: number): Uint8Array | FileFault {
  const value = plainNumber(text)
  if (value !== null && value <= 255) return Uint8Array.of(value)
  return fault(`Line ${line}: ${JSON.stringify(text)} at ${addressText(address)} is no byte from 0 to 255 (decimal or 0x…).`, { line, address })
}

function pairs(text: string, line: number): Uint8Array | FileFault {
  const digits = text.replaceAll(' ', '')
  if (digits === '') return fault(`Line ${line} has no bytes.`, { line })
  return hexDigits(digits, 0, line)
}
