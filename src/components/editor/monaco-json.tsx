import Editor from '@monaco-editor/react'
import type { OnMount } from '@monaco-editor/react'
import { useEffect, useMemo, useState } from 'react'
import { useThemeKey } from '../charts/use-theme-key.ts'
import { Waiting } from '../ui/waiting.tsx'
import type { EditorMarker, JsonEditorProps } from './editor-props.ts'
import { bindSchema, modelPath, monaco } from './monaco-setup.ts'
import { showTheme } from './monaco-theme.ts'
import './monaco.css'

type CodeEditor = Parameters<OnMount>[0]
type Model = NonNullable<ReturnType<CodeEditor['getModel']>>

const OWNER = 'detent'

export default function MonacoJson({ label, value, onChange, readOnly = false, schema, markers, path, reveal }: Omit<JsonEditorProps, 'height' | 'className'>) {
  const [editor, setEditor] = useState<CodeEditor | null>(null)
  const themeKey = useThemeKey()
  const theme = useMemo(() => showTheme(themeKey), [themeKey])

  useEffect(() => (schema ? bindSchema(path, schema) : undefined), [path, schema])

  useEffect(() => {
    const model = editor?.getModel()
    if (model) monaco.editor.setModelMarkers(model as never, OWNER, (markers ?? []).map((m) => markOf(model, m)))
  }, [editor, markers, path])

  useEffect(() => {
    if (!editor || !reveal) return
    editor.revealLineInCenterIfOutsideViewport(reveal.line)
    if (reveal.column === undefined) return
    editor.setPosition({ lineNumber: reveal.line, column: reveal.column })
    editor.focus()
  }, [editor, reveal])

  return (
    <Editor
      language="json"
      path={modelPath(path)}
      value={value}
      theme={theme}
      loading={<Waiting className="w-full p-4" what="the editor" lines={4} />}
      onChange={(text) => onChange?.(text ?? '')}
      onMount={(mounted) => {
        setEditor(mounted)
        // Widths are measured at the start; the face may come after it.
        void document.fonts?.load('13px "Fira Mono"').then(() => monaco.editor.remeasureFonts())
      }}
      options={{
        ariaLabel: label,
        readOnly,
        domReadOnly: readOnly,
        // Where nothing can be typed, Tab goes on through the page; in an editable text, Ctrl+M lets it.
        tabFocusMode: readOnly,
        automaticLayout: true,
        fixedOverflowWidgets: true,
        fontFamily: '"Fira Mono", ui-monospace, monospace',
        fontSize: 13,
        lineHeight: 20,
        fontLigatures: false,
        minimap: { enabled: false },
        scrollBeyondLastLine: false,
        padding: { top: 8, bottom: 8 },
        tabSize: 2,
        renderLineHighlight: readOnly ? 'none' : 'line',
        bracketPairColorization: { enabled: false },
        stickyScroll: { enabled: false },
        overviewRulerBorder: false,
        hideCursorInOverviewRuler: true,
        wordWrap: 'off',
        quickSuggestions: { strings: true, other: true, comments: false },
        unicodeHighlight: { ambiguousCharacters: false },
        links: false,
        contextmenu: false,
      }}
    />
  )
}

/** A mark runs from its place to the end of the word there, or of the line. */
function markOf(model: Model, { line, column, message, level = 'error' }: EditorMarker) {
  const startLineNumber = Math.min(Math.max(line, 1), model.getLineCount())
  const word = model.getWordAtPosition({ lineNumber: startLineNumber, column })
  return {
    severity: level === 'error' ? monaco.MarkerSeverity.Error : monaco.MarkerSeverity.Warning,
    message,
    startLineNumber,
    startColumn: word?.startColumn ?? column,
    endLineNumber: startLineNumber,
    endColumn: word?.endColumn ?? Math.max(column + 1, model.getLineMaxColumn(startLineNumber)),
  }
}
