import { findNodeAtLocation, parseTree } from 'jsonc-parser'
import type { EditorMarker } from '../../components/editor/editor-props.ts'
import { fromPointer } from '../../../shared/parameters/paths.ts'
import { placeOf, readJsonText } from '../../../shared/registers/json-text.ts'
import type { ParameterSchema, SchemaProblem } from '../../../shared/registers/parameter-schema.ts'
import { readParameterSchema } from '../../../shared/registers/read-parameter-schema.ts'

export interface DraftReading {
  /** null while the text cannot be used */
  schema: ParameterSchema | null
  marks: (EditorMarker & { pointer: string })[]
}

/** Line and column of a pointer in a text; of what holds it where it is not there. */
function placeIn(text: string, root: ReturnType<typeof parseTree>, pointer: string): { line: number; column: number } {
  for (let path = fromPointer(pointer); root; path = path.slice(0, -1)) {
    const node = findNodeAtLocation(root, path.map((p) => (/^\d+$/.test(p) ? Number(p) : p))) ?? findNodeAtLocation(root, path)
    if (node) return placeOf(text, node.offset)
    if (path.length === 0) break
  }
  return { line: 1, column: 1 }
}

/**
 * What a schema's text says so far: its register map, or where it cannot be read. The server checks more when it is saved
 * (its meta-schema needs code made at run time, which the page's content policy forbids).
 */
export function readDraft(text: string): DraftReading {
  const json = readJsonText(text)
  if (json.kind === 'refused') return { schema: null, marks: [{ line: json.line, column: json.column, message: json.message, pointer: '' }] }
  const reading = readParameterSchema(json.value)
  const root = parseTree(text)
  const marks = (problems: readonly SchemaProblem[], level: EditorMarker['level']) => problems.map((p) => ({ ...placeIn(text, root, p.pointer), message: p.message, pointer: p.pointer, level }))
  return reading.kind === 'schema' ? { schema: reading.schema, marks: marks(reading.schema.advice, 'advise') } : { schema: null, marks: marks(reading.problems, 'error') }
}
