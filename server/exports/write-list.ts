import type { EncodedImage, EncodedWord } from '../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../shared/registers/parameter-schema.ts'
import type { Role } from '../../shared/registers/roles.ts'
import { csvLine } from './csv-text.ts'
import { hex, hexBytes, type ExportContext } from './export-context.ts'

/** Order in which classes of registers are written: limits before the gains that need them, the address that breaks the line last. */
const CLASSES = ['limits', 'gains', 'rest', 'checksum', 'mode', 'address'] as const

function classOfRole(role: Role | null): (typeof CLASSES)[number] {
  if (role === null) return 'rest'
  if (role === 'bus.address') return 'address'
  if (role === 'control.mode') return 'mode'
  if (role.endsWith('.kp') || role.endsWith('.ki')) return 'gains'
  if (role.endsWith('.limit') || role === 'current.continuous' || role === 'position.min' || role === 'position.max') return 'limits'
  return 'rest'
}

/** A shared word goes with its latest field. */
function rankOf(schema: ParameterSchema, word: EncodedWord): number {
  if (word.kind === 'checksum') return CLASSES.indexOf('checksum')
  if (word.kind !== 'parameter') return CLASSES.indexOf('rest')
  return Math.max(...word.parameters.map((name) => CLASSES.indexOf(classOfRole(schema.byName.get(name)?.role ?? null))))
}

/** Words in the order in which a bench script writes them: by class, within it by address. */
export const wordsInWriteOrder = (schema: ParameterSchema, encoded: EncodedImage): EncodedWord[] =>
  [...encoded.words].sort((a, b) => rankOf(schema, a) - rankOf(schema, b) || a.address - b.address)

/**
 * Write list: CSV `device,register,bytes`, one row per word, bytes in hex as they lie in memory; register addresses of
 * 16 bit are written high byte first, as they go over the bus. Gaps and read-only registers are left out.
 */
export function writeWriteList(schema: ParameterSchema, encoded: EncodedImage, context: ExportContext): string {
  const digits = schema.image.addressWidth / 4
  const device = `0x${hex(context.device, 2)}`
  const rows = wordsInWriteOrder(schema, encoded).map((word) => csvLine([device, `0x${hex(word.address, digits)}`, hexBytes(word.bytes)]))
  return csvLine(['device', 'register', 'bytes']) + rows.join('')
}
