import { logLimit } from '../../../../shared/contract/evidence.ts'
import { FileDrop } from '../../../components/ui/file-drop.tsx'
import { formatBytes } from '../../../lib/format.ts'
import { useUploadLog, type Belonging } from '../mutations.ts'

/** Sends one log; then on to its page, where its columns are named. */
export function UploadLog({ belongs, hold = null, onSent }: { belongs: Belonging; hold?: string | null; onSent: (number: number) => void }) {
  const upload = useUploadLog()
  return (
    <FileDrop
      className="mt-2"
      label="bench log file"
      accept=".csv,.tsv,.txt,.log,text/csv,text/plain"
      limit={logLimit}
      smaller="Cut it into runs, or log fewer signals."
      hold={hold}
      afterwards="packing and hashing it"
      send={(sent, onSettled) => upload.mutate({ ...sent, belongs }, { onSettled, onSuccess: (view) => onSent(view.number) })}
      problem={upload.error}
      shown={['/log']}
      choose="Upload a bench log…"
    >
      <span className="text-12 text-ink-2">or drop it here: CSV with a time and a current at least, up to {formatBytes(logLimit)} and a million rows</span>
    </FileDrop>
  )
}
