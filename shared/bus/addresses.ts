/** Addresses of a two-wire bus: seven bits, and which of them I²C keeps for its own uses. Source: UM10204, table of reserved addresses and the text under it. */

export const ADDRESSES: readonly number[] = Array.from({ length: 128 }, (_, address) => address)

/** 0x00–0x07 and 0x78–0x7F. They may be used where nothing on the bus uses them for what they are kept for: a concession, never by default. */
export const reserved = (address: number): boolean => address <= 0x07 || address >= 0x78

/** What a reserved address is kept for. */
export function keptFor(address: number): string {
  if (address === 0x00) return 'general call and START byte'
  if (address === 0x01) return 'CBUS'
  if (address === 0x02) return 'a different bus format'
  if (address === 0x03) return 'future purposes'
  if (address <= 0x07) return 'Hs-mode controller codes'
  if (address >= 0x7c) return 'device identification and future purposes'
  return '10-bit addressing'
}

/** The ranges kept, ends included. */
export const reservedRanges: readonly { from: number; to: number }[] = [{ from: 0x00, to: 0x07 }, { from: 0x78, to: 0x7f }]

/** Free addresses, those that keep farthest from what is taken first: a bit flipped in one address then seldom makes another one. */
export function proposeAddresses(taken: Iterable<number>, count: number): number[] {
  const used = new Set(taken)
  const apart = (address: number) => Math.min(8, ...[...used].map((t) => bitsApart(address, t)))
  return ADDRESSES.filter((a) => !reserved(a) && !used.has(a))
    .map((address) => ({ address, apart: apart(address) }))
    .sort((a, b) => Number(b.apart > 1) - Number(a.apart > 1) || a.address - b.address)
    .slice(0, count)
    .map((a) => a.address)
}

function bitsApart(a: number, b: number): number {
  let count = 0
  for (let rest = a ^ b; rest > 0; rest >>= 1) count += rest & 1
  return count
}
