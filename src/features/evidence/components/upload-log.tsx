import { useRef, useState } from 'react'
import { logLimit } from '../../../../shared/contract/evidence.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { ErrorPanel } from '../../../components/ui/error-panel.tsx'
import { Progress } from '../../../components/ui/progress.tsx'
import { ApiProblem } from '../../../lib/api-client.ts'
import { formatBytes } from '../../../lib/format.ts'
import { useUploadLog, type Belonging } from '../mutations.ts'

interface Sending {
  name: string
  sent: number
  total: number
  stop: () => void
}

/** Sends one log: chosen or dropped, with what has gone and a way to stop; then on to its page, where its columns are named. */
export function UploadLog({ belongs, hold = null, onSent }: { belongs: Belonging; hold?: string | null; onSent: (number: number) => void }) {
  const send = useUploadLog()
  const input = useRef<HTMLInputElement>(null)
  const [sending, setSending] = useState<Sending | null>(null)
  const [tooLarge, setTooLarge] = useState<string | null>(null)
  const [over, setOver] = useState(false)
  const begin = (file: File | undefined) => {
    if (!file || hold || sending) return
    setTooLarge(file.size > logLimit ? `${file.name} has ${formatBytes(file.size)}; at most ${formatBytes(logLimit)} are taken. Cut it into runs, or log fewer signals.` : null)
    if (file.size > logLimit) return
    const stopper = new AbortController()
    setSending({ name: file.name, sent: 0, total: file.size, stop: () => stopper.abort() })
    send.mutate(
      { file, belongs, signal: stopper.signal, onProgress: (sent, total) => setSending((s) => s && { ...s, sent, total }) },
      { onSettled: () => setSending(null), onSuccess: (view) => onSent(view.number) },
    )
  }
  const stopped = send.error instanceof ApiProblem && send.error.code === 'stopped'
  return (
    <div
      className={`mt-2 border border-dashed px-4 py-3 ${over ? 'border-brass bg-brass-wash' : 'border-rule'}`}
      onDragOver={(e) => {
        e.preventDefault()
        setOver(true)
      }}
      onDragLeave={() => setOver(false)}
      onDrop={(e) => {
        e.preventDefault()
        setOver(false)
        begin(e.dataTransfer.files[0])
      }}
    >
      <input
        ref={input}
        type="file"
        className="sr-only"
        tabIndex={-1}
        aria-label="bench log file"
        accept=".csv,.tsv,.txt,.log,text/csv,text/plain"
        onChange={(e) => {
          begin(e.target.files?.[0])
          e.target.value = ''
        }}
      />
      {sending ? (
        <Progress label={`Sending ${sending.name}`} done={sending.sent} total={sending.total} noun="bytes" onStop={sending.stop} note={sending.sent >= sending.total ? 'packing and hashing it' : 'stops if you leave'} />
      ) : (
        <div className="flex flex-wrap items-center gap-3">
          <Button unavailable={hold} onClick={() => input.current?.click()}>
            Upload a bench log…
          </Button>
          <span className="text-12 text-ink-2">or drop it here: CSV with a time and a current at least, up to {formatBytes(logLimit)} and a million rows</span>
        </div>
      )}
      {tooLarge && <ErrorPanel className="mt-2" title="The file is too large" happened={tooLarge} kept="Nothing was sent." />}
      {stopped ? <p className="mt-2 text-13 text-ink-2">Stopped; nothing was kept.</p> : <ProblemPanel className="mt-2" problem={send.error} shown={['/log']} />}
    </div>
  )
}
