import { useState } from 'react'
import type { FirmwareVersionView } from '../../../shared/contract/firmware.ts'
import { useEditVersion } from './mutations.ts'

interface Typed {
  /** what the typing began from: a save over anything newer is refused */
  revision: number
  text: string
  notes: string
}

/** A firmware draft as it is being written: what was typed, over what, and its saving. Saved text is the version's own. */
export function useDraft(version: FirmwareVersionView) {
  const edit = useEditVersion(version.line, version.version)
  const [typed, setTyped] = useState<Typed | null>(null)
  const [savedAt, setSavedAt] = useState<Date | null>(null)
  const now: Typed = typed ?? { revision: version.revision, text: version.schemaText, notes: version.notes }
  const dirty = typed !== null && (typed.text !== version.schemaText || typed.notes !== version.notes)
  return {
    text: now.text,
    notes: now.notes,
    dirty,
    /** somebody saved while this was being typed */
    overtaken: dirty && now.revision !== version.revision,
    savedAt,
    saving: edit.isPending,
    problem: edit.error,
    /** the text that the problem is about */
    refusedText: edit.isError ? edit.variables.schemaText : null,
    alter: (part: Partial<Pick<Typed, 'text' | 'notes'>>) => setTyped((before) => ({ ...(before ?? now), ...part })),
    save: () =>
      edit.mutate(
        { schemaText: now.text, notes: now.notes, revision: now.revision },
        {
          onSuccess: (view) => {
            setSavedAt(new Date())
            // What was typed while the save was under way goes on from there.
            setTyped((latest) => (latest && (latest.text !== now.text || latest.notes !== now.notes) ? { ...latest, revision: view.revision } : null))
          },
        },
      ),
  }
}

export type Draft = ReturnType<typeof useDraft>
