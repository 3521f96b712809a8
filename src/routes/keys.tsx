import { useSuspenseQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { PageHead } from '../components/layout/page-head.tsx'
import { refusal } from '../components/layout/refused.ts'
import { Button } from '../components/ui/button.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { KeyList } from '../features/keys/components/key-list.tsx'
import { RotateKeyDialog } from '../features/keys/components/rotate-key-dialog.tsx'
import { keysQuery } from '../features/keys/queries.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => queryClient.ensureQueryData(keysQuery)

/** What a kit's README says too, so that nobody has to trust a kit for how to prove it. */
const commands = [
  ['The key is this one: prints its name, as it stands on this page.', 'openssl pkey -pubin -in public-key.pem -outform DER | sha256sum'],
  ['The sums and the manifest were signed with it.', 'openssl pkeyutl -verify -pubin -inkey public-key.pem -rawin -in SHA256SUMS -sigfile SHA256SUMS.sig\nopenssl pkeyutl -verify -pubin -inkey public-key.pem -rawin -in manifest.json -sigfile manifest.sig'],
  ['Every file is the one that was signed.', 'sha256sum --check --strict SHA256SUMS'],
] as const

export function Component() {
  const { keys, may } = useSuspenseQuery(keysQuery).data
  const [rotating, setRotating] = useState(false)
  return (
    <>
      <PageHead
        title="Keys"
        actions={
          <Button kind="danger" unavailable={refusal(may.rotate)} onClick={() => setRotating(true)}>
            Rotate…
          </Button>
        }
      >
        the public keys by which anybody proves a release kit; the private one lies outside the database, for the server alone
      </PageHead>
      <div className="max-w-[880px]">
        <section aria-labelledby="public-keys" className="mb-8">
          <SectionHeading id="public-keys">Public keys</SectionHeading>
          <KeyList keys={keys} />
        </section>
        <section aria-labelledby="proving">
          <SectionHeading id="proving">Proving a kit without Detent</SectionHeading>
          <p className="mt-2 max-w-[80ch] text-13 text-ink-2">Unpack the kit, put the public key you know from this page in the place of its own, and run these in its folder (OpenSSL 3.0 or newer).</p>
          <ol className="mt-2 grid grid-cols-[minmax(0,1fr)] gap-3">
            {commands.map(([does, command]) => (
              <li key={command}>
                <p className="text-13">{does}</p>
                <pre className="sheet num mt-1 px-3 py-2 text-12 whitespace-pre-wrap [overflow-wrap:anywhere]">{command}</pre>
              </li>
            ))}
          </ol>
        </section>
      </div>
      {rotating && <RotateKeyDialog current={keys[0]} onClose={() => setRotating(false)} />}
    </>
  )
}
