import type { MachineSet } from './machine-set.ts'

/** A place in a machine set, as an RFC 6901 JSON pointer. */
export type Pointer = string

const escape = (part: string) => part.replaceAll('~', '~0').replaceAll('/', '~1')
const unescape = (part: string) => part.replaceAll('~1', '/').replaceAll('~0', '~')

export const toPointer = (parts: readonly (string | number)[]): Pointer => parts.map((p) => `/${escape(String(p))}`).join('')
export const fromPointer = (pointer: Pointer): string[] => (pointer === '' ? [] : pointer.slice(1).split('/').map(unescape))

const owns = (o: unknown, key: string): o is Record<string, unknown> => typeof o === 'object' && o !== null && Object.hasOwn(o, key)

/** The value at a place, or undefined where there is none. */
export function valueAt(set: MachineSet, pointer: Pointer): unknown {
  let here: unknown = set
  for (const part of fromPointer(pointer)) {
    if (!owns(here, part)) return undefined
    here = here[part]
  }
  return here
}

/** A copy of the set with the value at a place set, or taken away when it is undefined. Parents must exist. */
export function withValueAt(set: MachineSet, pointer: Pointer, value: unknown): MachineSet {
  const parts = fromPointer(pointer)
  if (parts.length === 0) throw new RangeError('the whole set is not one value')
  const put = (here: unknown, depth: number): unknown => {
    if (typeof here !== 'object' || here === null || Array.isArray(here)) throw new RangeError(`${toPointer(parts.slice(0, depth))} holds no members`)
    const { [parts[depth]]: _old, ...rest } = here as Record<string, unknown>
    if (depth === parts.length - 1) {
      if (value === undefined) return rest
      return { ...here, [parts[depth]]: value }
    }
    if (!owns(here, parts[depth])) throw new RangeError(`${toPointer(parts.slice(0, depth + 1))} does not exist`)
    return { ...here, [parts[depth]]: put(here[parts[depth]], depth + 1) }
  }
  if (parts.some((p) => p === '__proto__')) throw new RangeError('__proto__ is no key')
  return put(set, 0) as MachineSet
}
