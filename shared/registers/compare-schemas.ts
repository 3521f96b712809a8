import type { Parameter, ParameterSchema } from './parameter-schema.ts'
import { spanText } from './register-map.ts'

export type SchemaAspect = 'place' | 'encoding' | 'scale' | 'unit' | 'bounds' | 'default' | 'access' | 'values' | 'role' | 'kind'

export interface ParameterChange {
  readonly kind: 'added' | 'removed' | 'changed'
  /** Name now; for a removed one, its name before. */
  readonly parameter: string
  /** Name before, where x-carry renames it. */
  readonly renamedFrom: string | null
  /** `place`: moved. `encoding` and `scale`: rescaled. */
  readonly aspects: readonly { readonly aspect: SchemaAspect; readonly before: string; readonly after: string }[]
}

export interface SchemaComparison {
  readonly parameters: readonly ParameterChange[]
  /** Root settings that differ, by name. */
  readonly image: readonly { readonly setting: string; readonly before: string; readonly after: string }[]
}

/** Two versions of a firmware line: parameters added, removed, moved, rescaled, and what else of them differs. */
export function compareSchemas(before: ParameterSchema, after: ParameterSchema): SchemaComparison {
  const renames = new Map(Object.entries(after.carry?.renames ?? {}).map(([old, now]) => [now, old]))
  const parameters: ParameterChange[] = []
  const met = new Set<string>()
  for (const parameter of after.parameters) {
    const oldName = before.byName.has(parameter.name) ? parameter.name : (renames.get(parameter.name) ?? parameter.name)
    const old = before.byName.get(oldName)
    if (!old) {
      parameters.push({ kind: 'added', parameter: parameter.name, renamedFrom: null, aspects: [] })
      continue
    }
    met.add(oldName)
    const was = aspectsOf(old)
    const is = aspectsOf(parameter)
    const aspects = (Object.keys(is) as SchemaAspect[]).filter((a) => was[a] !== is[a]).map((aspect) => ({ aspect, before: was[aspect], after: is[aspect] }))
    const renamedFrom = oldName === parameter.name ? null : oldName
    if (aspects.length > 0 || renamedFrom) parameters.push({ kind: 'changed', parameter: parameter.name, renamedFrom, aspects })
  }
  for (const parameter of before.parameters) {
    if (!met.has(parameter.name)) parameters.push({ kind: 'removed', parameter: parameter.name, renamedFrom: null, aspects: [] })
  }
  return { parameters, image: compareImages(before, after) }
}

function aspectsOf(parameter: Parameter): Record<SchemaAspect, string> {
  const register = parameter.register
  const { minimum, maximum, exclusiveMinimum, exclusiveMaximum, multipleOf } = parameter.bounds
  const bound = (name: string, text: string | undefined): string => (text === undefined ? '' : `${name} ${text} `)
  return {
    place: register ? spanText(register.address, register.bytes) + (register.bit === null ? '' : ` bit ${register.bit} width ${register.width}`) : 'no register',
    encoding: register ? `${register.encoding.name} ${register.byteOrder}` : 'none',
    scale: register ? `${register.scale}·raw + ${register.offset}` : 'none',
    unit: parameter.unit ?? 'none',
    bounds: (bound('min', minimum?.text) + bound('max', maximum?.text) + bound('above', exclusiveMinimum?.text) + bound('below', exclusiveMaximum?.text) + bound('step', multipleOf?.text)).trim() || 'none',
    default: String(parameter.default ?? 'none'),
    access: register?.access ?? 'none',
    values: register?.values ? Object.entries(register.values).map(([member, raw]) => `${member} ${raw}`).join(', ') : 'none',
    role: (parameter.role ?? 'none') + (parameter.perTick ? ` per ${parameter.perTick} tick` : ''),
    kind: parameter.kind,
  }
}

function compareImages(before: ParameterSchema, after: ParameterSchema): SchemaComparison['image'] {
  const told = (schema: ParameterSchema): Record<string, string> => {
    const { checksum, layoutId, release, ...plain } = schema.image
    return {
      ...Object.fromEntries(Object.entries(plain).map(([key, value]) => [key, String(value)])),
      checksum: checksum ? `${checksum.algorithm} at ${spanText(checksum.address, checksum.bytes)} over ${checksum.from} to ${checksum.to}` : 'none',
      layoutId: layoutId ? `${layoutId.value} at ${spanText(layoutId.address, layoutId.bytes)}` : 'none',
      release: release ? spanText(release.address, release.bytes) : 'none',
    }
  }
  const was = told(before)
  const is = told(after)
  return Object.keys(is).filter((setting) => was[setting] !== is[setting]).map((setting) => ({ setting, before: was[setting], after: is[setting] }))
}
