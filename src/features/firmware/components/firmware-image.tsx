import { useMutation } from '@tanstack/react-query'
import { useRef, useState } from 'react'
import { firmwareImageLimit, type FirmwareVersionView } from '../../../../shared/contract/firmware.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { ErrorPanel } from '../../../components/ui/error-panel.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { Progress } from '../../../components/ui/progress.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { ApiProblem } from '../../../lib/api-client.ts'
import { formatBytes } from '../../../lib/format.ts'
import { takeFile } from '../../../lib/take-file.ts'
import { useAttachImage, useDetachImage } from '../mutations.ts'

const formats = { bin: 'raw bytes', hex: 'Intel HEX' } as const

export interface FirmwareImageProps {
  version: FirmwareVersionView
  /** why nothing can be attached now, such as a draft with unsaved text */
  hold: string | null
}

/** The firmware itself beside its register map: attached to a draft, fixed by publishing, handed out by its hash. */
export function FirmwareImage({ version, hold }: FirmwareImageProps) {
  const { firmwareImage: image, may } = version
  const href = `/api/firmware/${encodeURIComponent(version.line)}/${encodeURIComponent(version.version)}/image`
  const take = useMutation({ mutationFn: () => takeFile(href, image?.name ?? 'firmware') })
  return (
    <section aria-labelledby="firmware-image" className="mt-8">
      <SectionHeading id="firmware-image" aux={image ? `${formatBytes(image.bytes)}, ${formats[image.format]}` : undefined}>
        Firmware image
      </SectionHeading>
      {image ? (
        <div className="mt-2 flex flex-wrap items-center gap-x-4 gap-y-2">
          <div className="min-w-0">
            <p className="num [overflow-wrap:anywhere]">{image.name}</p>
            <Hash hash={image.sha256} className="[overflow-wrap:anywhere]" />
          </div>
          <Button small unavailable={may.downloadImage.allowed ? null : may.downloadImage.why} pending={take.isPending} onClick={() => take.mutate()}>
            Download
          </Button>
        </div>
      ) : (
        <p className="mt-2 text-13 text-ink-2">{may.edit.allowed ? 'None is attached. Kits hold the firmware of their boards where it is here.' : 'None was attached.'}</p>
      )}
      <div role="status">
        {take.data && (
          <p className="mt-1 text-12 text-ink-2">
            saved <span className="num text-ink">{take.data.name}</span>; its bytes have the SHA-256 the server states
          </p>
        )}
      </div>
      <ProblemPanel className="mt-2" problem={take.error} />
      {may.edit.allowed && <Attach version={version} hold={hold} />}
    </section>
  )
}

interface Sending {
  name: string
  sent: number
  total: number
  stop: () => void
}

function Attach({ version, hold }: FirmwareImageProps) {
  const attach = useAttachImage(version.line, version.version)
  const detach = useDetachImage(version.line, version.version)
  const input = useRef<HTMLInputElement>(null)
  const [sending, setSending] = useState<Sending | null>(null)
  const [tooLarge, setTooLarge] = useState<string | null>(null)
  const [over, setOver] = useState(false)
  const send = (file: File | undefined) => {
    if (!file || hold || sending) return
    setTooLarge(file.size > firmwareImageLimit ? `${file.name} has ${formatBytes(file.size)}; at most ${formatBytes(firmwareImageLimit)} are taken.` : null)
    if (file.size > firmwareImageLimit) return
    const stopper = new AbortController()
    setSending({ name: file.name, sent: 0, total: file.size, stop: () => stopper.abort() })
    attach.mutate(
      { file, revision: version.revision, signal: stopper.signal, onProgress: (sent, total) => setSending((s) => s && { ...s, sent, total }) },
      { onSettled: () => setSending(null) },
    )
  }
  const stopped = attach.error instanceof ApiProblem && attach.error.code === 'stopped'
  return (
    <div
      className={`mt-3 border border-dashed px-4 py-3 ${over ? 'border-brass bg-brass-wash' : 'border-rule'}`}
      onDragOver={(e) => {
        e.preventDefault()
        setOver(true)
      }}
      onDragLeave={() => setOver(false)}
      onDrop={(e) => {
        e.preventDefault()
        setOver(false)
        send(e.dataTransfer.files[0])
      }}
    >
      <input
        ref={input}
        type="file"
        className="sr-only"
        tabIndex={-1}
        aria-label="firmware image file"
        accept=".bin,.hex,.ihex,.ihx,application/octet-stream"
        onChange={(e) => {
          send(e.target.files?.[0])
          e.target.value = ''
        }}
      />
      {sending ? (
        <Progress label={`Sending ${sending.name}`} done={sending.sent} total={sending.total} noun="bytes" onStop={sending.stop} note={sending.sent >= sending.total ? 'hashing and looking at it' : 'stops if you leave'} />
      ) : (
        <div className="flex flex-wrap items-center gap-3">
          <Button unavailable={hold} onClick={() => input.current?.click()}>
            {version.firmwareImage ? 'Attach another…' : 'Attach a firmware image…'}
          </Button>
          {version.firmwareImage && (
            <Button kind="link" unavailable={hold} pending={detach.isPending} onClick={() => detach.mutate(version.revision)}>
              take it away
            </Button>
          )}
          <span className="text-12 text-ink-2">or drop it here: .bin or Intel HEX, at most {formatBytes(firmwareImageLimit)}; you then count as one of its writers</span>
        </div>
      )}
      {tooLarge && <ErrorPanel className="mt-2" title="The file is too large" happened={tooLarge} kept="Nothing was sent." />}
      {stopped ? <p className="mt-2 text-13 text-ink-2">Stopped; nothing was kept.</p> : <ProblemPanel className="mt-2" problem={attach.error} shown={['/image']} />}
      <ProblemPanel className="mt-2" problem={detach.error} />
    </div>
  )
}
