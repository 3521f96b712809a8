import { convertValue, readQuantity } from '../../../shared/units/quantity.ts'

/** Units that a stored SI quantity may be shown in, largest first. Others are shown as stored. */
const shownIn: Readonly<Record<string, readonly string[]>> = {
  H: ['H', 'mH', 'µH'],
  F: ['F', 'mF', 'µF', 'nF', 'pF'],
  Ω: ['Ω', 'mΩ'],
  A: ['A', 'mA', 'µA'],
  s: ['s', 'ms'],
  rad: ['rad', 'mrad'],
  'N·m': ['N·m', 'mN·m'],
  'N·m/A': ['N·m/A', 'mN·m/A'],
  'V·s/rad': ['V·s/rad', 'mV·s/rad'],
  'kg·m²': ['kg·m²', 'g·m²', 'mg·m²'],
  'N·m·s/rad': ['N·m·s/rad', 'mN·m·s/rad', 'µN·m·s/rad'],
}

/** The unit in which a quantity reads without leading zeros: 0.42 mH, not 0.00042 H. */
export function displayUnit(unit: string | null, nominal: number | undefined): string | null {
  const units = unit === null ? undefined : shownIn[unit]
  if (!units || nominal === undefined || nominal === 0) return unit
  return units.find((u) => Math.abs(Number(inUnit(nominal, unit, u))) >= 0.1) ?? units[units.length - 1]
}

/** A stored number in another unit, digit for digit. */
export function inUnit(value: number | string, from: string | null, to: string | null): number | string {
  const converted = convertValue(value, from, to)
  return converted.kind === 'value' ? converted.value : value
}

/** Digits kept of a value that a change of unit makes endless (deg to rad): more than any register or model tells apart. */
const ENDLESS_DIGITS = 12

export type TypedQuantity = { kind: 'value'; value: number | string } | { kind: 'refused'; message: string }

/** A typed quantity in the unit wanted; without a unit of its own it is taken in `assumed`. What is wrong with it is said in words. */
export function readTypedQuantity(text: string, wanted: string | null, assumed: string | null = wanted): TypedQuantity {
  const bare = readQuantity(text, assumed)
  if (bare.kind === 'refused') return { kind: 'refused', message: otherKind(text, assumed, bare.message) }
  const value = assumed === wanted ? bare : convertValue(bare.value, assumed, wanted)
  if (value.kind === 'refused') return value
  const rounded = (bare.rounded || value.rounded) && typeof value.value === 'number'
  return { kind: 'value', value: rounded ? Number((value.value as number).toPrecision(ENDLESS_DIGITS)) : value.value }
}

/** A unit of another kind, in the words of the bench instead of base units. */
function otherKind(text: string, unit: string | null, message: string): string {
  if (!message.includes('this value is in')) return message
  const named = /[^\d\s.+\-\u2212eE].*$/.exec(text.trim())?.[0] ?? text
  return unit === null ? `This value has no unit; "${named}" does not belong to it.` : `"${named}" does not fit a value in ${unit}.`
}
