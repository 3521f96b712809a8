import { useMutation } from '@tanstack/react-query'
import { firmwareImageLimit, type FirmwareVersionView } from '../../../../shared/contract/firmware.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { FileDrop } from '../../../components/ui/file-drop.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
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

function Attach({ version, hold }: FirmwareImageProps) {
  const attach = useAttachImage(version.line, version.version)
  const detach = useDetachImage(version.line, version.version)
  return (
    <>
      <FileDrop
        className="mt-3"
        label="firmware image file"
        accept=".bin,.hex,.ihex,.ihx,application/octet-stream"
        limit={firmwareImageLimit}
        hold={hold}
        afterwards="hashing and looking at it"
        send={(sent, onSettled) => attach.mutate({ ...sent, revision: version.revision }, { onSettled })}
        problem={attach.error}
        shown={['/image']}
        choose={version.firmwareImage ? 'Attach another…' : 'Attach a firmware image…'}
      >
        {version.firmwareImage && (
          <Button kind="link" unavailable={hold} pending={detach.isPending} onClick={() => detach.mutate(version.revision)}>
            take it away
          </Button>
        )}
        <span className="text-12 text-ink-2">or drop it here: .bin or Intel HEX, at most {formatBytes(firmwareImageLimit)}; you then count as one of its writers</span>
      </FileDrop>
      <ProblemPanel className="mt-2" problem={detach.error} />
    </>
  )
}
