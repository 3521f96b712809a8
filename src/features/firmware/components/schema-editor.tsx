import { useMemo, useState } from 'react'
import type { FirmwareVersionView } from '../../../../shared/contract/firmware.ts'
import { JsonEditor } from '../../../components/editor/json-editor.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { ErrorPanel } from '../../../components/ui/error-panel.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { ApiProblem, fieldError } from '../../../lib/api-client.ts'
import { count } from '../../../lib/format.ts'
import { schemaOfSchemas } from '../editor-schema.ts'
import type { readDraft } from '../read-draft.ts'
import type { Draft } from '../use-draft.ts'

export interface SchemaEditorProps {
  version: Pick<FirmwareVersionView, 'line' | 'version'>
  draft: Draft
  reading: ReturnType<typeof readDraft>
}

const MOST_LISTED = 8

/** Writes a draft's schema and notes: marks as it is typed, the server's word when it is saved. */
export function SchemaEditor({ version, draft, reading }: SchemaEditorProps) {
  const [reveal, setReveal] = useState<{ line: number; column: number } | null>(null)
  const errors = reading.marks.filter((m) => m.level !== 'advise')
  const isRefusedText = draft.refusedText === draft.text
  const markers = useMemo(() => [...reading.marks, ...(isRefusedText ? toldBy(draft.problem) : [])], [reading.marks, draft.problem, isRefusedText])
  return (
    <div>
      {draft.overtaken && (
        <ErrorPanel className="mb-3" title="Somebody saved this draft while you typed" kept="Your text stays here." whatToDo="Copy what you want to keep, then load the page again to see theirs; saving over it is refused." />
      )}
      <JsonEditor
        label={`parameter schema of ${version.line} ${version.version}`}
        path={`firmware/${version.line}-${version.version}.json`}
        value={draft.text}
        onChange={(text) => draft.alter({ text })}
        schema={schemaOfSchemas}
        markers={markers}
        reveal={reveal}
        height="min(64vh, 720px)"
      />
      <p className="help lg:hidden">The editor wants a screen of 1024 px; here it serves for reading.</p>
      <p className="help max-lg:hidden">Ctrl+Space completes, hovering explains, Ctrl+M lets Tab leave the text.</p>
      <div className="mt-3 flex flex-wrap items-center gap-3">
        <Button kind="primary" unavailable={draft.dirty ? null : 'Nothing is altered since it was saved.'} pending={draft.saving} onClick={draft.save}>
          Save the draft
        </Button>
        <span role="status" className="text-13 text-ink-2">
          {errors.length > 0 ? `${count(errors.length, 'place')} to correct` : draft.dirty ? 'reads well; not saved yet' : draft.savedAt ? <>saved <Time at={draft.savedAt} style="clock" /></> : 'as saved'}
        </span>
      </div>
      {errors.length > 0 && (
        <ul className="mt-2 grid gap-1 text-13">
          {errors.slice(0, MOST_LISTED).map((m, i) => (
            <li key={i}>
              <button type="button" className="link num" onClick={() => setReveal({ line: m.line, column: m.column })}>
                line {m.line}
              </button>{' '}
              {m.message}
            </li>
          ))}
          {errors.length > MOST_LISTED && <li className="text-ink-2">and {errors.length - MOST_LISTED} more, marked in the text</li>}
        </ul>
      )}
      <ProblemPanel className="mt-3" problem={draft.problem} shown={['/notes']} />
      <TextArea className="mt-5 max-w-[80ch]" label="Notes" value={draft.notes} onChange={(notes) => draft.alter({ notes })} maxLength={4000} rows={4} error={fieldError(draft.problem, '/notes')} />
    </div>
  )
}

/** The places that the server named when it refused a text. */
function toldBy(error: unknown) {
  const problems = error instanceof ApiProblem && Array.isArray(error.extra.problems) ? (error.extra.problems as { line?: number; column?: number; message: string }[]) : []
  return problems.map((p) => ({ line: p.line ?? 1, column: p.column ?? 1, message: p.message }))
}
