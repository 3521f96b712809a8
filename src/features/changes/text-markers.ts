import type { Finding } from '../../../shared/contract/checks.ts'
import { placeOf, readText, type TextProblem } from '../../../shared/parameters/set-text.ts'
import type { EditorMarker } from '../../components/editor/editor-props.ts'

/** Marks of the text view: what keeps it from being read or saved, and the findings of the check that name a place. */
export function textMarkers(text: string, problems: readonly TextProblem[], findings: readonly Finding[]): EditorMarker[] {
  const broken = problems.map((p): EditorMarker => ({ line: p.line, column: p.column, message: p.message, level: 'error' }))
  const read = readText(text)
  if (!read.ok) return broken
  const found = findings.flatMap((f): EditorMarker[] => {
    if (f.level === 'pass' || f.pointer === undefined) return []
    const offset = offsetOf(read.pointerOffsets, f.pointer)
    if (offset === null) return []
    return [{ ...placeOf(text, offset), message: [f.text, f.remedy].filter(Boolean).join(' '), level: f.level === 'block' ? 'error' : 'advise' }]
  })
  return [...broken, ...found]
}

/** Where a place stands in the text; an inherited value stands in the text of what holds it. */
export function offsetOf(offsets: ReadonlyMap<string, number>, pointer: string): number | null {
  for (let p = pointer; p !== ''; p = p.slice(0, p.lastIndexOf('/'))) {
    const offset = offsets.get(p)
    if (offset !== undefined) return offset
  }
  return null
}
