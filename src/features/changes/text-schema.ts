import { BusSettings, DriveTrain, FamilySettings, JointSettings, type MachineSet, type Value } from '../../../shared/parameters/machine-set.ts'
import type { Parameter } from '../../../shared/registers/parameter-schema.ts'
import { isEditable, jointsOf, parametersOfFamily, schemasOfFamily, type Schemas } from './value-cells.ts'
import { boundsOf, heldText, rangeText, registerText, shownValue } from './typed-value.ts'

type Json = Record<string, unknown>

/** The plain JSON Schema in a type of the contract. */
const plain = (schema: unknown): Json => JSON.parse(JSON.stringify(schema)) as Json
const properties = (schema: Json) => schema.properties as Record<string, Json>

const address: Json = { anyOf: [{ type: 'integer', minimum: 0, maximum: 127 }, { type: 'string', pattern: '^0x[0-9a-fA-F]{1,2}$' }], description: '7-bit bus address, as "0x33"' }
/** A number, or its decimal text where a double does not hold it. */
const decimal: Json = { type: 'string', pattern: '^[+-]?\\d+(\\.\\d+)?([eE][+-]?\\d+)?$' }

/** One parameter: type and range for marks, title, unit, register and what the register holds for hover. */
function parameterSchema(p: Parameter, value: Value | undefined): Json {
  const { min, max } = boundsOf(p)
  const description = [
    [p.unit ?? '', rangeText(p)].filter(Boolean).join(', '),
    p.register ? `register ${registerText(p)}` : 'fixed by the firmware',
    value === undefined ? '' : `${shownValue(value)}${p.unit ? ` ${p.unit}` : ''}: ${heldText(p, value) || 'held as it stands'}`,
    p.default === null ? 'no default' : `firmware default ${shownValue(p.default)}`,
    p.boardBound ? 'bound to the board it was measured on' : '',
    p.description,
  ].filter(Boolean)
  const base = { title: p.title, description: description.join('\n\n'), ...(p.default === null ? {} : { default: p.default }) }
  if (p.choices) return { ...base, enum: [...p.choices] }
  if (p.kind === 'boolean') return { ...base, type: 'boolean' }
  const number: Json = { type: p.kind, ...(min === null ? {} : { minimum: min }), ...(max === null ? {} : { maximum: max }) }
  return { ...base, anyOf: [number, decimal] }
}

const valuesSchema = (parameters: readonly Parameter[], values: Readonly<Record<string, Value>>): Json => ({
  type: 'object',
  additionalProperties: false,
  properties: Object.fromEntries(parameters.map((p) => [p.name, parameterSchema(p, Object.hasOwn(values, p.name) ? values[p.name] : undefined)])),
})

/** Keyed members: those the set holds by their own schema, others by the general one. */
const keyed = (own: Record<string, Json>, other: Json, description: string): Json => ({ type: 'object', description, properties: own, additionalProperties: other })

/**
 * JSON Schema of a change's text, for completion, hover help and marks in the editor.
 *
 * Made from the shape of a machine set and the parameters of the firmware versions its joints stand on. The server's own check is the authority.
 */
export function textSchema(set: MachineSet, schemas: Schemas): Json {
  const families = Object.keys(set.families)
  const buses = Object.keys(set.buses)
  const firmware = [...new Set([...Object.keys(schemas), ...Object.values(set.joints).map((j) => j.firmware)])].sort()

  const bus = plain(BusSettings)
  ;((properties(bus).otherDevices.items as Json).properties as Json).address = address
  const family = plain(FamilySettings)
  properties(family).driveTrain = plain(DriveTrain)
  const joint = plain(JointSettings)
  properties(joint).address = address
  properties(joint).family = { type: 'string', enum: families, description: 'family of the joint' }
  properties(joint).bus = { type: 'string', enum: buses, description: 'bus it sits on' }
  properties(joint).firmware = { type: 'string', enum: firmware, description: 'firmware line and version' }

  const withValues = (schema: Json, values: Json): Json => ({ ...schema, properties: { ...properties(schema), values } })
  const familySchemas = families.map((key): [string, Json] => {
    const known = schemasOfFamily(set, key, schemas).length > 0 && jointsOf(set, key).every((j) => Object.hasOwn(schemas, set.joints[j].firmware))
    return [key, known ? withValues(family, valuesSchema(parametersOfFamily(set, key, schemas), set.families[key].values)) : family]
  })
  const jointSchemas = Object.entries(set.joints).map(([key, j]): [string, Json] => {
    const schema = Object.hasOwn(schemas, j.firmware) ? schemas[j.firmware] : null
    return [key, schema ? withValues(joint, valuesSchema(schema.parameters.filter(isEditable), j.values)) : joint]
  })
  return {
    type: 'object',
    required: ['buses', 'families', 'joints'],
    additionalProperties: false,
    properties: {
      buses: keyed({}, bus, 'two-wire buses, by key'),
      families: keyed(Object.fromEntries(familySchemas), family, 'joints built alike: drive train and values shared by them'),
      joints: keyed(Object.fromEntries(jointSchemas), joint, 'driven axes: bus, address, firmware, and values of their own'),
    },
  }
}
