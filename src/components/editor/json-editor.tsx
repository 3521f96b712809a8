import { lazy, Suspense } from 'react'
import { Waiting } from '../ui/waiting.tsx'
import type { JsonEditorProps } from './editor-props.ts'

export type { EditorMarker, JsonEditorProps } from './editor-props.ts'

const MonacoJson = lazy(() => import('./monaco-json.tsx'))

/** JSON with comments, in an editor that is fetched only when one is shown. */
export function JsonEditor({ height = 480, className = '', ...rest }: JsonEditorProps) {
  return (
    <div className={`overflow-hidden rounded border border-rule bg-sheet focus-within:outline-2 focus-within:outline-offset-2 focus-within:outline-brass ${className}`} style={{ height }}>
      <Suspense fallback={<Waiting className="p-4" what="the editor" lines={4} />}>
        <MonacoJson {...rest} />
      </Suspense>
    </div>
  )
}
