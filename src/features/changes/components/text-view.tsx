import { useDeferredValue, useMemo } from 'react'
import type { Finding } from '../../../../shared/contract/checks.ts'
import { readText } from '../../../../shared/parameters/set-text.ts'
import { JsonEditor } from '../../../components/editor/json-editor.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { ErrorPanel } from '../../../components/ui/error-panel.tsx'
import { count } from '../../../lib/format.ts'
import type { DraftState } from '../draft-keeper.ts'
import { offsetOf, textMarkers } from '../text-markers.ts'
import { textSchema } from '../text-schema.ts'
import type { Schemas } from '../value-cells.ts'
import { placeOf } from '../../../../shared/parameters/set-text.ts'

export interface TextViewProps {
  state: Pick<DraftState, 'set' | 'text' | 'textProblems' | 'saving'>
  changeKey: string
  schemas: Schemas
  findings: readonly Finding[]
  /** family or joint looked at: its line is shown first */
  pointer: string | null
  /** null: read only */
  onType: ((text: string) => void) | null
  onDrop: () => void
}

/** The whole change as text, JSON with comments: completion, hover help and marks by the firmware versions' schemas, problems and findings at their line. */
export function TextView({ state, changeKey, schemas, findings, pointer, onType, onDrop }: TextViewProps) {
  const text = useDeferredValue(state.text)
  const set = useDeferredValue(state.set)
  const schema = useMemo(() => textSchema(set, schemas), [set, schemas])
  const markers = useMemo(() => textMarkers(text, state.textProblems, findings), [text, state.textProblems, findings])
  const reveal = useReveal(state.text, pointer)
  return (
    <div>
      <JsonEditor label={`text of change ${changeKey}`} path={`changes/${changeKey}.json`} value={state.text} readOnly={onType === null} onChange={onType ?? undefined} schema={schema} markers={markers} reveal={reveal} height="min(72vh, 860px)" />
      {state.saving === 'unread' && (
        <div className="mt-3">
          <ErrorPanel
            title={`${count(state.textProblems.length, 'place')} to correct before the text can be saved`}
            kept="What you typed is kept in this browser; the last saved state stands on the server and in the other views."
            pointers={state.textProblems.slice(0, 20).map((p) => ({ pointer: `line ${p.line}, column ${p.column}`, message: p.message }))}
          />
          <Button small className="mt-2 ml-[14px]" onClick={onDrop}>
            Let go of the typed text
          </Button>
        </div>
      )}
    </div>
  )
}

/** The line of what is looked at, once for each; typing does not move the page. */
function useReveal(text: string, pointer: string | null) {
  return useMemo(() => {
    const read = pointer === null ? null : readText(text)
    const offset = read?.ok ? offsetOf(read.pointerOffsets, pointer!) : null
    return offset === null ? null : { line: placeOf(text, offset).line }
    // Only a new place is gone to: the text alters with every key.
    // eslint-disable-next-line react-hooks/exhaustive-deps
  }, [pointer])
}
