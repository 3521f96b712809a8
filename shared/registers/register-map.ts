import type { ImageLayout, ImageRegister, Parameter, Word, WordKind } from './parameter-schema.ts'
import { under, type ProblemList } from './problem-list.ts'

const hex = (address: number): string => `0x${address.toString(16).toUpperCase().padStart(2, '0')}`

/** Address span of a word, for messages: `0x24–0x27`. */
export const spanText = (address: number, bytes: number): string =>
  bytes === 1 ? hex(address) : `${hex(address)}–${hex(address + bytes - 1)}`

interface Entry { readonly word: Word; readonly pointer: string; readonly label: string }

/**
 * The words of a map by address: registers, words shared by fields, and the image's own registers.
 *
 * Adds a problem for every overlap, field collision, disagreement within a word, and word outside the image.
 */
export function layWords(parameters: readonly Parameter[], image: ImageLayout, list: ProblemList): readonly Word[] {
  const entries: Entry[] = []
  const shared = new Map<string, Parameter[]>()
  for (const parameter of parameters) {
    const register = parameter.register
    if (!register) continue
    if (register.bit === null) entries.push(entryOf([parameter]))
    else {
      const key = `${register.address} ${register.encoding.name} ${register.byteOrder}`
      const fields = shared.get(key)
      if (fields) fields.push(parameter)
      else shared.set(key, [parameter])
    }
  }
  for (const fields of shared.values()) {
    checkFields(fields, list)
    entries.push(entryOf(fields))
  }
  own(entries, 'checksum', image.checksum, '/x-image/checksum', image)
  own(entries, 'layout-id', image.layoutId, '/x-image/layoutId', image)
  own(entries, 'release', image.release, '/x-image/release', image)
  entries.sort((a, b) => a.word.address - b.word.address || a.word.bytes - b.word.bytes)
  checkPlaces(entries, image, list)
  return entries.map((entry) => entry.word)
}

function entryOf(fields: Parameter[]): Entry {
  const [first] = fields
  const register = first.register!
  const parameters = fields.length > 1 ? [...fields].sort((a, b) => (a.register!.bit ?? 0) - (b.register!.bit ?? 0)) : fields
  const reserved = fields.map((f) => f.register!.reserved).find((r) => r !== null) ?? 0
  return {
    word: {
      kind: 'parameter', address: register.address, bytes: register.bytes, encoding: register.encoding,
      byteOrder: register.byteOrder, access: register.access, reserved, parameters,
    },
    pointer: first.pointer,
    label: first.name,
  }
}

function own(entries: Entry[], kind: WordKind, register: ImageRegister | null, pointer: string, image: ImageLayout): void {
  if (!register) return
  const { address, bytes, encoding } = register
  entries.push({
    word: { kind, address, bytes, encoding, byteOrder: image.byteOrder, access: 'rw', reserved: 0, parameters: [] },
    pointer,
    label: kind,
  })
}

/** Fields of one word: disjoint bits, one access, one `reserved` with 0 inside every field. */
function checkFields(fields: readonly Parameter[], list: ProblemList): void {
  const taken = new Map<number, string>()
  const stated = fields.filter((f) => f.register!.reserved !== null)
  for (const field of fields) {
    const register = field.register!
    const at = under(field.pointer, 'x-register')
    for (let bit = register.bit!; bit < register.bit! + register.width!; bit += 1) {
      const other = taken.get(bit)
      if (other !== undefined) {
        list.add(under(at, 'bit'), 'fields-overlap', `Bit ${bit} of ${spanText(register.address, register.bytes)} already belongs to ${other}.`)
        break
      }
      taken.set(bit, field.name)
    }
    if (register.access !== fields[0].register!.access) {
      list.add(under(at, 'access'), 'access-differs', `${field.name} is ${register.access}, but ${fields[0].name} in the same word is ${fields[0].register!.access}.`)
    }
    if (register.reserved !== null && register.reserved !== stated[0].register!.reserved) {
      list.add(under(at, 'reserved'), 'reserved-differs', `${field.name} and ${stated[0].name} share a word but state different reserved bits.`)
    }
  }
  for (const field of stated) {
    const reserved = field.register!.reserved!
    const inside = [...taken.keys()].find((bit) => Math.floor(reserved / 2 ** bit) % 2 === 1)
    if (inside !== undefined) {
      list.add(under(under(field.pointer, 'x-register'), 'reserved'), 'reserved-in-field', `reserved has bit ${inside} set, which belongs to ${taken.get(inside)}.`)
    }
  }
}

const addressOf = ({ word, pointer }: Entry): string => under(word.kind === 'parameter' ? under(pointer, 'x-register') : pointer, 'address')

function checkPlaces(entries: readonly Entry[], image: ImageLayout, list: ProblemList): void {
  const last = image.base + image.length - 1
  let before: Entry | null = null
  for (const entry of entries) {
    const { word } = entry
    const end = word.address + word.bytes - 1
    if (word.address < image.base || end > last) {
      list.add(addressOf(entry), 'outside-image', `${entry.label} at ${spanText(word.address, word.bytes)} lies outside the image, ${spanText(image.base, image.length)}.`)
    }
    if (before && before.word.address + before.word.bytes > word.address) {
      list.add(addressOf(entry), 'registers-overlap', `${entry.label} at ${spanText(word.address, word.bytes)} overlaps ${before.label} at ${spanText(before.word.address, before.word.bytes)}.`)
    }
    if (!before || end >= before.word.address + before.word.bytes) before = entry
    if (image.checksum && word.access !== 'rw' && word.address <= image.checksum.to && end >= image.checksum.from) {
      list.add('/x-image/checksum', 'checksum-over-unwritten',
        `The checksum runs over ${entry.label} at ${spanText(word.address, word.bytes)}, which is ${word.access}: the board's own checksum would differ. Set from and to around it.`)
    }
  }
}
