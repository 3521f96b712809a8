import type { Edit } from '../../../shared/parameters/edits.ts'
import { fromPointer } from '../../../shared/parameters/paths.ts'
import type { MachineSet, Value } from '../../../shared/parameters/machine-set.ts'
import type { Parameter } from '../../../shared/registers/parameter-schema.ts'
import { formatHex } from '../../lib/format.ts'
import { lineOfLetter } from './drive-train-letters.ts'
import { shownValue } from './typed-value.ts'
import type { Schemas } from './value-cells.ts'

const fieldWords: Record<string, string> = {
  name: 'name', address: 'address', bus: 'bus', family: 'family', firmware: 'firmware', board: 'board', bitRate: 'bit rate', supply: 'supply', pullUp: 'pull-up', capacitance: 'capacitance',
  pollingRate: 'polling rate', bytesPerTransaction: 'bytes a poll', otherDevices: 'other devices',
}

function parameterNamed(name: string, schemas: Schemas): Parameter | undefined {
  for (const schema of Object.values(schemas)) {
    const found = schema.byName.get(name)
    if (found) return found
  }
  return undefined
}

/** A place of the set in words: "Velocity gain of the Knee family", "address of R3 knee". Sets are asked for names in turn. */
export function placeWords(pointer: string, sets: readonly MachineSet[], schemas: Schemas): string {
  const [top, key, part, name] = fromPointer(pointer)
  const named = (of: 'families' | 'joints' | 'buses') => sets.map((s) => s[of][key]?.name).find((n) => n !== undefined) ?? key
  const owner = top === 'families' ? `the ${named('families')} family` : top === 'joints' ? named('joints') : `the bus ${named('buses')}`
  if (part === undefined) return owner
  if (name === undefined) return `${part === 'values' ? 'the values' : part === 'driveTrain' ? 'the drive train' : (fieldWords[part] ?? part)} of ${owner}`
  if (part === 'driveTrain') return `${lineOfLetter(name)?.words ?? name} of ${owner}`
  return `${parameterNamed(name, schemas)?.title ?? name} of ${owner}`
}

export const unitOfPlace = (pointer: string, schemas: Schemas): string => {
  const [, , part, name] = fromPointer(pointer)
  if (name === undefined) return ''
  return (part === 'driveTrain' ? lineOfLetter(name)?.unit : parameterNamed(name, schemas)?.unit) ?? ''
}

/** What stands at a place, short: a value, a quantity with its bounds, "nothing", or the name of a joint, family or bus. */
export function contentWords(content: unknown, pointer = ''): string {
  if (content === undefined || content === null) return 'nothing of its own'
  if (typeof content === 'number' && pointer.endsWith('/address')) return formatHex(content)
  if (typeof content !== 'object') return shownValue(content as Value)
  if ('value' in content && 'low' in content && 'high' in content) {
    const q = content as { value: number; low: number; high: number }
    return `${shownValue(q.value)} (${shownValue(q.low)} to ${shownValue(q.high)})`
  }
  return 'name' in content ? String(content.name) : 'as a whole'
}

/** A joint, family or bus that came or went as a whole: "R4 knee added"; null for any other edit. */
export function wholeWords({ pointer, from, to }: Edit): string | null {
  if (fromPointer(pointer).length !== 2) return null
  return to === undefined || to === null ? `${contentWords(from)} removed` : from === undefined || from === null ? `${contentWords(to)} added` : null
}
