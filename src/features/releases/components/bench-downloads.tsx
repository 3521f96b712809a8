import { useMutation } from '@tanstack/react-query'
import { useState } from 'react'
import type { ReleaseView } from '../../../../shared/contract/releases.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Caution } from '../../../components/ui/caution.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { formatBytes, formatHex } from '../../../lib/format.ts'
import { imageHref, takeFile, type ImageFormat } from '../take-file.ts'

const formats: readonly { format: ImageFormat; words: string }[] = [
  { format: 'bin', words: 'Raw image' },
  { format: 'hex', words: 'Intel HEX' },
]

/** A joint's files with their hashes, and the caution that goes with every download. */
export function BenchDownloads({ release }: { release: ReleaseView }) {
  const [joint, setJoint] = useState(release.items[0]?.joint ?? '')
  const item = release.items.find((i) => i.joint === joint)
  const { download } = release.may
  return (
    <section aria-label="for the bench" className="no-print">
      <SectionHeading>For the bench</SectionHeading>
      {!download.allowed ? (
        <p className="mt-2 text-13 text-ink-2">{download.why}</p>
      ) : (
        <>
          {release.state !== 'current' && (
            <p className={`mt-2 text-13 ${release.state === 'withdrawn' ? 'text-oxide' : 'text-plum'}`}>{release.state === 'withdrawn' ? 'This release is withdrawn: its files are for analysis, not for a board.' : 'This release is superseded: a newer one exists.'}</p>
          )}
          <Select className="mt-2" label="Joint" value={joint} onChange={setJoint} options={release.items.map((i) => ({ value: i.joint, label: `${i.name}, ${i.bus} ${formatHex(i.address)}, r${i.revision}` }))} />
          {item && (
            <>
              <p className="mt-2 text-12 text-ink-2">
                SHA-256 of the raw image, {formatBytes(item.imageBytes)}
                <Hash hash={item.imageSha256} className="block !text-ink [overflow-wrap:anywhere]" />
              </p>
              <ul className="mt-2">
                {formats.map((f) => (
                  <FileRow key={`${joint} ${f.format}`} release={release} joint={joint} name={item.name} {...f} />
                ))}
              </ul>
            </>
          )}
        </>
      )}
      <Caution className="mt-4" />
    </section>
  )
}

function FileRow({ release, joint, name, format, words }: { release: ReleaseView; joint: string; name: string; format: ImageFormat; words: string }) {
  const take = useMutation({ mutationFn: () => takeFile(imageHref(release.machine, release.version, joint, format), `${release.machine}-${release.version}-${joint}.${format}`) })
  return (
    <li className="border-b border-hairline py-2">
      <div className="flex items-center gap-3">
        <span className="flex-1">{words}</span>
        <span className="num text-13 text-ink-2">.{format}</span>
        <Button small pending={take.isPending} onClick={() => take.mutate()} aria-label={`Download .${format} of ${name}`}>
          Download
        </Button>
      </div>
      <div role="status">
        {take.data && (
          <p className="mt-1 text-12 text-ink-2">
            saved <span className="num text-ink">{take.data.name}</span>, {formatBytes(take.data.bytes)}; its bytes have the SHA-256 the server states
            <Hash hash={take.data.sha256} className="block !text-12 [overflow-wrap:anywhere]" />
          </p>
        )}
      </div>
      <ProblemPanel className="mt-1" problem={take.error} />
    </li>
  )
}
