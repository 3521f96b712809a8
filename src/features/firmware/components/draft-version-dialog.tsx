import { useQueryClient } from '@tanstack/react-query'
import { useState } from 'react'
import type { FirmwareLineView, FirmwareVersionView } from '../../../../shared/contract/firmware.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { firstSchema } from '../first-schema.ts'
import { useDraftVersion } from '../mutations.ts'
import { firmwareVersionQuery } from '../queries.ts'

export interface DraftVersionDialogProps {
  line: Pick<FirmwareLineView, 'key' | 'name' | 'versions'>
  onClose: () => void
  onDrafted: (version: FirmwareVersionView) => void
}

const NOTHING = '*'

/** Drafts a version from the schema of another one, or from a small first map. */
export function DraftVersionDialog({ line, onClose, onDrafted }: DraftVersionDialogProps) {
  const draft = useDraftVersion(line.key)
  const client = useQueryClient()
  const [version, setVersion] = useState('')
  const [from, setFrom] = useState(line.versions[0]?.version ?? NOTHING)
  const [notes, setNotes] = useState('')
  const [unread, setUnread] = useState<unknown>(null)
  const [reading, setReading] = useState(false)
  const pending = draft.isPending || reading
  const save = async () => {
    setUnread(null)
    setReading(true)
    try {
      const schemaText = from === NOTHING ? firstSchema(`${line.key} ${version.trim()}`) : (await client.ensureQueryData(firmwareVersionQuery(line.key, from))).schemaText
      draft.mutate({ version: version.trim(), schemaText, notes: notes.trim() }, { onSuccess: onDrafted })
    } catch (error) {
      setUnread(error)
    } finally {
      setReading(false)
    }
  }
  return (
    <Dialog
      open
      onClose={onClose}
      busy={pending}
      title={`Draft a version of ${line.name}`}
      actions={
        <>
          <Button kind="primary" unavailable={version.trim() === '' ? 'Write the version first.' : null} pending={pending} onClick={() => void save()}>
            Draft it
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <TextField label="Version" mono width={160} value={version} onChange={setVersion} maxLength={40} spellCheck={false} autoComplete="off" error={fieldError(draft.error, '/version')} help="as the firmware calls itself, such as 2.2.0" />
      <Select label="Schema begins as" value={from} onChange={setFrom} options={[...line.versions.map((v) => ({ value: v.version, label: `that of ${v.version}` })), { value: NOTHING, label: 'a small first map' }]} />
      <TextArea label="Notes" value={notes} onChange={setNotes} maxLength={4000} error={fieldError(draft.error, '/notes')} help="what is new; it can be written later" />
      <ProblemPanel problem={draft.error ?? unread} shown={['/version', '/notes']} />
    </Dialog>
  )
}
