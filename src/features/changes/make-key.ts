/** A key made from a name: "R3 knee" gives "r3-knee"; a number is added until nobody else has it. "" when the name has no letter or digit. */
export function makeKey(name: string, taken: readonly string[]): string {
  const plain = name.normalize('NFKD').toLowerCase().replaceAll(/[^a-z0-9]+/g, '-').replaceAll(/^-+|-+$/g, '').slice(0, 36).replace(/-+$/, '')
  if (plain === '') return ''
  for (let n = 1; n <= taken.length + 1; n += 1) {
    const key = n === 1 ? plain : `${plain}-${n}`
    if (!taken.includes(key)) return key
  }
  return ''
}

/** The lowest address nobody on the bus has, outside the reserved ranges (0x00 to 0x07, 0x78 to 0x7F; UM10204); null when the bus is full. */
export function freeAddress(taken: readonly number[]): number | null {
  for (let a = 0x08; a <= 0x77; a += 1) if (!taken.includes(a)) return a
  return null
}
