import { useMutation } from '@tanstack/react-query'
import { useState } from 'react'
import type { ReactNode } from 'react'
import { paths } from '../../../app/paths.ts'
import type { ReleaseView } from '../../../../shared/contract/releases.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Caution } from '../../../components/ui/caution.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { count, formatBytes, formatHex } from '../../../lib/format.ts'
import { takeFile } from '../../../lib/take-file.ts'
import { fileForms, imageHref, kitHref } from '../take-file.ts'

/** A joint's files and the kit of all of them, with their hashes, and the caution that goes with every download. */
export function BenchDownloads({ release }: { release: ReleaseView }) {
  const [joint, setJoint] = useState(release.items[0]?.joint ?? '')
  const [reason, setReason] = useState('')
  const item = release.items.find((i) => i.joint === joint)
  const { download } = release.may
  const missing = release.needsReason && reason.trim() === '' ? 'Write why you need a superseded release first.' : null
  const why = reason.trim() || undefined
  const missingForKit = release.unfit.length > 0 ? 'The kit holds a joint whose files are refused.' : missing
  return (
    <section aria-label="for the bench" className="no-print">
      <SectionHeading>For the bench</SectionHeading>
      {!download.allowed ? (
        <p className="mt-2 text-13 text-ink-2">{download.why}</p>
      ) : (
        <>
          {release.state !== 'current' && (
            <p className={`mt-2 text-13 ${release.state === 'withdrawn' ? 'text-oxide' : 'text-plum'}`}>{release.state === 'withdrawn' ? 'This release is withdrawn: its files are for analysis, not for a board.' : 'This release is superseded: a newer one exists, and its files are marked so.'}</p>
          )}
          {release.unfit.length > 0 && (
            <div className="mt-2 border-l-2 border-plum bg-plum-wash px-3 py-2 text-13">
              <p className="font-medium text-plum">Not to be flashed as released: {release.unfit.map((u) => u.name).join(', ')}</p>
              {release.unfit.map((u) => (
                <p key={u.joint}>{u.why}</p>
              ))}
            </div>
          )}
          {release.needsReason && <TextField className="mt-2" label="Why a superseded release is needed" value={reason} onChange={setReason} maxLength={2000} help="It stands in the ledger beside each download." />}
          {release.kit && (
            <div className="mt-2">
              <Take label={`Download the kit, ${count(release.items.length, 'joint')}`} aside={formatBytes(release.kit.bytes)} href={kitHref(release.machine, release.version, why)} name={`${release.machine}-${release.version}.zip`} missing={missingForKit} primary />
              <p className="mt-1 text-12 text-ink-2">
                One .zip, the same bytes every time; its manifest is signed with Ed25519, and the kit says how to verify it with openssl alone. <TextLink to={paths.keys()}>The workplace’s keys</TextLink>
                {release.firmwareImages.length > 0 && <> With the firmware of {release.firmwareImages.join(', ')}.</>}
              </p>
              <p className="mt-1 text-12 text-ink-2">
                SHA-256 of the manifest
                <Hash hash={release.kit.manifestSha256} className="block !text-ink [overflow-wrap:anywhere]" />
              </p>
            </div>
          )}
          <Select className="mt-3" label="Joint" value={joint} onChange={setJoint} options={release.items.map((i) => ({ value: i.joint, label: `${i.name}, ${i.bus} ${formatHex(i.address)}, r${i.revision}` }))} />
          {item && (
            <>
              <p className="mt-2 text-12 text-ink-2">
                SHA-256 of the raw image, {formatBytes(item.imageBytes)}
                <Hash hash={item.imageSha256} className="block !text-ink [overflow-wrap:anywhere]" />
              </p>
              <ul className="mt-2">
                {fileForms.map((f) => (
                  <li key={`${joint} ${f.format}`} className="border-b border-hairline py-[5px]">
                    <Take
                      label="Download"
                      said={`Download ${f.words} of ${item.name}`}
                      before={
                        <>
                          <span className="flex-1">{f.words}</span>
                          <span className="num text-13 text-ink-2">{f.ending}</span>
                        </>
                      }
                      href={imageHref(release.machine, release.version, joint, f.format, why)}
                      name={`${release.machine}-${release.version}-${joint}${f.ending}`}
                      missing={missing}
                    />
                  </li>
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

interface TakeProps {
  label: string
  /** the whole label where the short one does not say what is fetched */
  said?: string
  before?: ReactNode
  aside?: ReactNode
  href: string
  /** file name when the server gives none */
  name: string
  /** why it can't be fetched yet */
  missing: string | null
  primary?: boolean
}

/** Fetches one file, proves its bytes, saves it, and says under which name and hash. */
function Take({ label, said, before, aside, href, name, missing, primary = false }: TakeProps) {
  const take = useMutation({ mutationFn: () => takeFile(href, name) })
  return (
    <>
      <div className="flex items-center gap-3">
        {before}
        <Button small={!primary} kind={primary ? 'primary' : 'plain'} className={primary ? 'flex-1' : ''} pending={take.isPending} unavailable={missing} onClick={() => take.mutate()} aria-label={said}>
          {label}
        </Button>
        {aside && <span className="num text-13 text-ink-2">{aside}</span>}
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
    </>
  )
}
