import metaSchema from '../../../schemas/parameter-schema.json' with { type: 'json' }
import vocabulary from '../../../schemas/register-vocabulary.json' with { type: 'json' }

/** The meta-schema and the vocabulary it refers to as one schema, since the editor fetches no other. */
function inOne(): object {
  const rename = (value: unknown, own: boolean): unknown => {
    if (Array.isArray(value)) return value.map((v) => rename(v, own))
    if (typeof value !== 'object' || value === null) return value
    return Object.fromEntries(
      Object.entries(value).map(([key, v]) => {
        if (key !== '$ref' || typeof v !== 'string') return [key, rename(v, own)]
        return [key, v.startsWith('register-vocabulary.json#/$defs/') || !own ? `#/$defs/vocabulary-${v.split('/').at(-1)}` : v]
      }),
    )
  }
  const { $schema: _dialect, $vocabulary: _vocabulary, $defs, ...rest } = metaSchema
  const words = Object.fromEntries(Object.entries(vocabulary.$defs).map(([name, v]) => [`vocabulary-${name}`, rename(v, false)]))
  return { ...(rename(rest, true) as object), $defs: { ...(rename($defs, true) as object), ...words } }
}

/** For completion, hover help and marks while a parameter schema is written. */
export const schemaOfSchemas = inOne()
