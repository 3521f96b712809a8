import type { Ajv2020 } from 'ajv/dist/2020.js'
import vocabulary from '../../schemas/register-vocabulary.json' with { type: 'json' }

/** The vocabulary's keywords and the definition that each one's content must meet. */
const KEYWORDS = {
  'x-register': 'register',
  'x-image': 'image',
  'x-unit': 'unit',
  'x-role': 'role',
  'x-bound': 'bound',
  'x-per-tick': 'perTick',
  'x-carry': 'carry',
} as const

/** Teaches an Ajv instance Detent's register vocabulary: annotations whose content is checked when a schema is compiled. */
export function addRegisterVocabulary(ajv: Ajv2020): void {
  if (!ajv.getSchema(vocabulary.$id)) ajv.addSchema(vocabulary)
  for (const [keyword, definition] of Object.entries(KEYWORDS)) {
    if (!ajv.getKeyword(keyword)) ajv.addKeyword({ keyword, metaSchema: { $ref: `${vocabulary.$id}#/$defs/${definition}` } })
  }
}
