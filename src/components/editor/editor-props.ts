/** A mark in the text beside those of the schema, as from the server's own check. Lines and columns count from 1. */
export interface EditorMarker {
  line: number
  column: number
  message: string
  level?: 'error' | 'advise'
}

export interface JsonEditorProps {
  /** Said to a screen reader. */
  label: string
  value: string
  onChange?: (text: string) => void
  readOnly?: boolean
  /** JSON Schema for completion, hover help and marks. */
  schema?: object
  markers?: readonly EditorMarker[]
  /** A name of its own for each text, such as "changes/dunlin-47.json"; the schema is bound to it. */
  path: string
  height?: number | string
  /** Line to show first, or to go to when it changes; with the column the cursor is set there. */
  reveal?: { line: number; column?: number } | null
  className?: string
}
