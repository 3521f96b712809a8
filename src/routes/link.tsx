import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useParams } from 'react-router'
import type { LinkUsed } from '../../shared/contract/people.ts'
import { paths } from '../app/paths.ts'
import { DoorPage } from '../components/layout/door-page.tsx'
import { Region } from '../components/layout/region.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { UseLinkForm } from '../features/people/components/use-link-form.tsx'
import { linkQuery } from '../features/people/queries.ts'

/** Where a mailed invitation or reset leads. */
export function Component() {
  const secret = useParams().secret!
  const link = useQuery(linkQuery(secret))
  const [used, setUsed] = useState<LinkUsed | null>(null)
  const title = used ? 'Your password is set' : link.isError ? 'This link cannot be used' : link.data?.kind === 'invitation' ? 'Invitation' : 'New password'
  return (
    <DoorPage title={title}>
      {used ? (
        <>
          <p>You can sign in as {used.email} now; older sessions have ended.</p>
          {used.signingHold && <p className="mt-2">Your signatures wait until another signer confirms you. Ask one: they find you under people.</p>}
          <div className="mt-4">
            <LinkButton kind="primary" to={paths.signIn()}>
              Sign in
            </LinkButton>
          </div>
        </>
      ) : (
        <>
          <Region query={link} what="the link">
            {(view) => <UseLinkForm link={view} secret={secret} onUsed={setUsed} />}
          </Region>
          {link.isError && (
            <div className="mt-4 flex flex-wrap gap-2">
              <LinkButton to={paths.forgotten()}>Ask for a new link</LinkButton>
              <LinkButton to={paths.signIn()}>Sign in</LinkButton>
            </div>
          )}
        </>
      )}
    </DoorPage>
  )
}
