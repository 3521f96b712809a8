/** The parts of an OpenAPI document that the page shows. */
export interface ApiSchema {
  type?: string | string[]
  description?: string
  properties?: Record<string, ApiSchema>
  required?: string[]
  items?: ApiSchema
  anyOf?: ApiSchema[]
  const?: unknown
  pattern?: string
  format?: string
  minimum?: number
  maximum?: number
  minLength?: number
  maxLength?: number
  patternProperties?: Record<string, ApiSchema>
}

export interface ApiOperation {
  operationId: string
  tags: string[]
  summary: string
  description?: string
  security: Record<string, unknown>[]
  parameters: { name: string; in: string; required?: boolean; description?: string; example?: string; schema: ApiSchema }[]
  requestBody?: { content: Record<string, { schema: ApiSchema; example?: unknown }> }
  responses: Record<string, { description: string; content: Record<string, unknown> }>
}

export interface ApiDocument {
  openapi: string
  info: { title: string; version: string; description: string }
  tags: { name: string; description: string }[]
  paths: Record<string, Record<string, ApiOperation>>
}

export interface Listed extends ApiOperation {
  method: string
  path: string
}

export const operationsOf = (document: ApiDocument): Listed[] =>
  Object.entries(document.paths).flatMap(([path, item]) => Object.entries(item).map(([method, operation]) => ({ ...operation, method, path })))

/** What a schema takes, in a few words: "text, 1 to 120 characters". */
export function schemaWords(schema: ApiSchema): string {
  if (schema.const !== undefined) return JSON.stringify(schema.const)
  if (schema.anyOf) return [...new Set(schema.anyOf.map(schemaWords))].join(' or ')
  const names: Record<string, string> = { string: 'text', number: 'number', integer: 'whole number', boolean: 'true or false', null: 'null', array: 'list', object: 'object' }
  const type = [schema.type ?? []].flat().map((t) => names[t] ?? t).join(' or ') || 'anything'
  const range = (low: number | undefined, high: number | undefined, unit: string) => (low === undefined && high === undefined ? '' : low === undefined ? `, at most ${high}${unit}` : high === undefined ? `, at least ${low}${unit}` : `, ${low} to ${high}${unit}`)
  if (schema.type === 'array') return `list of ${schema.items ? schemaWords(schema.items) : 'anything'}`
  return `${type}${schema.format ? ` (${schema.format})` : ''}${range(schema.minLength, schema.maxLength, ' characters')}${range(schema.minimum, schema.maximum, '')}`
}

export interface Member {
  /** "edits[].pointer" */
  name: string
  required: boolean
  schema: ApiSchema
}

/** Members of a body, those within members after them, four levels deep. */
export function membersOf(schema: ApiSchema, at = '', depth = 0): Member[] {
  if (depth > 3) return []
  if (schema.type === 'array' && schema.items) return membersOf(schema.items, `${at}[]`, depth)
  return Object.entries(schema.properties ?? {}).flatMap(([key, inner]) => {
    const name = at === '' ? key : `${at}.${key}`
    return [{ name, required: schema.required?.includes(key) ?? false, schema: inner }, ...membersOf(inner, name, depth + 1)]
  })
}
