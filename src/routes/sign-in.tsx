import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useNavigate, useSearchParams } from 'react-router'
import { paths } from '../app/paths.ts'
import { DoorPage } from '../components/layout/door-page.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { DemoSignIns } from '../features/people/components/demo-sign-ins.tsx'
import { SignInForm } from '../features/people/components/sign-in-form.tsx'
import { workplaceQuery } from '../features/people/queries.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => {
  void queryClient.prefetchQuery(workplaceQuery)
  return null
}

/** Only an address of our own is gone to after signing in. */
const ownPath = (next: string | null) => (next && /^\/(?![/\\])/.test(next) ? next : paths.desk())

export function Component() {
  const [search] = useSearchParams()
  const navigate = useNavigate()
  const workplace = useQuery(workplaceQuery)
  const [email, setEmail] = useState('')
  const [password, setPassword] = useState('')
  const signIns = workplace.data?.mode === 'demo' ? workplace.data.signIns : []
  return (
    <DoorPage title="Sign in" wide={signIns.length > 0}>
      <div className={signIns.length > 0 ? 'grid gap-10 lg:grid-cols-[340px_1fr]' : ''}>
        <div>
          <SignInForm email={email} password={password} onEmail={setEmail} onPassword={setPassword} onSignedIn={() => void navigate(ownPath(search.get('next')), { replace: true })}>
            <TextLink to={paths.forgotten()}>Forgotten password</TextLink>
          </SignInForm>
          {workplace.data?.mode === 'demo' && workplace.data.secondFactor === 'optional' && <p className="mt-6 max-w-[50ch] text-13 text-ink-2">The demo asks for no second factor. A real workplace asks it of everybody who signs.</p>}
        </div>
        {signIns.length > 0 && (
          <DemoSignIns
            signIns={signIns}
            onChoose={(s) => {
              setEmail(s.email)
              setPassword(s.password)
            }}
          />
        )}
      </div>
    </DoorPage>
  )
}
