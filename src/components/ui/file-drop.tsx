import { useRef, useState, type ReactNode } from 'react'
import { ApiProblem } from '../../lib/api-client.ts'
import { formatBytes } from '../../lib/format.ts'
import { ProblemPanel } from '../problem/problem-panel.tsx'
import { Button } from './button.tsx'
import { ErrorPanel } from './error-panel.tsx'
import { Progress } from './progress.tsx'

interface Sending {
  name: string
  sent: number
  total: number
  stop: () => void
}

/** How a file is sent: told as it goes, and stopped by the signal. */
export interface Sent {
  file: File
  signal: AbortSignal
  onProgress: (sent: number, total: number) => void
}

export interface FileDropProps {
  /** Named for a screen reader. */
  label: string
  accept: string
  /** most bytes that are taken */
  limit: number
  /** what to do about a larger file */
  smaller?: string
  /** why nothing is taken now */
  hold: string | null
  /** what the server does once everything has gone */
  afterwards: string
  send: (sent: Sent, settled: () => void) => void
  problem: unknown
  /** pointers of the problem that this field stands for */
  shown: readonly string[]
  className?: string
  /** words of the button that opens the list of files */
  choose: string
  /** what stands beside it */
  children: ReactNode
}

/** Sends one file, chosen or dropped: too large a one is refused before, what has gone is told, and it can be stopped. */
export function FileDrop({ label, accept, limit, smaller, hold, afterwards, send, problem, shown, className = '', choose, children }: FileDropProps) {
  const input = useRef<HTMLInputElement>(null)
  const [sending, setSending] = useState<Sending | null>(null)
  const [tooLarge, setTooLarge] = useState<string | null>(null)
  const [over, setOver] = useState(false)
  const begin = (file: File | undefined) => {
    if (!file || hold || sending) return
    setTooLarge(file.size > limit ? `${file.name} has ${formatBytes(file.size)}; at most ${formatBytes(limit)} are taken.${smaller ? ` ${smaller}` : ''}` : null)
    if (file.size > limit) return
    const stopper = new AbortController()
    setSending({ name: file.name, sent: 0, total: file.size, stop: () => stopper.abort() })
    send({ file, signal: stopper.signal, onProgress: (sent, total) => setSending((s) => s && { ...s, sent, total }) }, () => setSending(null))
  }
  const stopped = problem instanceof ApiProblem && problem.code === 'stopped'
  return (
    <div
      className={`border border-dashed px-4 py-3 ${over ? 'border-brass bg-brass-wash' : 'border-rule'} ${className}`}
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
        aria-label={label}
        accept={accept}
        onChange={(e) => {
          begin(e.target.files?.[0])
          e.target.value = ''
        }}
      />
      {sending ? (
        <Progress label={`Sending ${sending.name}`} done={sending.sent} total={sending.total} noun="bytes" onStop={sending.stop} note={sending.sent >= sending.total ? afterwards : 'stops if you leave'} />
      ) : (
        <div className="flex flex-wrap items-center gap-3">
          <Button unavailable={hold} onClick={() => input.current?.click()}>
            {choose}
          </Button>
          {children}
        </div>
      )}
      {tooLarge && <ErrorPanel className="mt-2" title="The file is too large" happened={tooLarge} kept="Nothing was sent." />}
      {stopped ? <p className="mt-2 text-13 text-ink-2">Stopped; nothing was kept.</p> : <ProblemPanel className="mt-2" problem={problem} shown={shown} />}
    </div>
  )
}
