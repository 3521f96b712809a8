import { loader } from '@monaco-editor/react'
import * as monaco from 'monaco-editor/editor'
import EditorWorker from 'monaco-editor/editor/editor.worker?worker'
import 'monaco-editor/features/register.all'
import { jsonDefaults } from 'monaco-editor/languages/features/json/register'
import JsonWorker from 'monaco-editor/languages/features/json/json.worker?worker'

self.MonacoEnvironment = { getWorker: (_id, label) => (label === 'json' ? new JsonWorker() : new EditorWorker()) }
// Shipped with the application; the loader would otherwise fetch the editor from another host.
loader.config({ monaco: monaco as never })

/** The address of a text's model; a schema is bound to it by name. */
export const modelPath = (path: string) => `inmemory://text/${path}`

const schemas = new Map<string, object>()

function tell() {
  jsonDefaults.setDiagnosticsOptions({
    validate: true,
    comments: 'ignore',
    trailingCommas: 'error',
    schemaValidation: 'warning',
    enableSchemaRequest: false,
    schemaRequest: 'ignore',
    schemas: [...new Set(schemas.values())].map((schema) => {
      const paths = [...schemas].filter(([, s]) => s === schema).map(([path]) => path)
      // A text that names its schema by $schema is judged by the one with that name alone.
      return { uri: '$id' in schema && typeof schema.$id === 'string' ? schema.$id : `inmemory://schema/${paths[0]}`, fileMatch: paths.map(modelPath), schema }
    }),
  })
}
tell()

/** Binds a schema to a text. Returns the way to take it back. */
export function bindSchema(path: string, schema: object): () => void {
  schemas.set(path, schema)
  tell()
  return () => {
    if (schemas.get(path) !== schema) return
    schemas.delete(path)
    tell()
  }
}

export { monaco }
