import { useQueryClient } from '@tanstack/react-query'
import { lazy, Suspense, useEffect, useState } from 'react'
import { Waiting } from '../../../components/ui/waiting.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { onSignedOut } from '../../../lib/api-client.ts'

// Needed when a session ends, not before.
const SignInForm = lazy(() => import('./sign-in-form.tsx').then((m) => ({ default: m.SignInForm })))

/** Comes over the page when the session has ended, so that what was typed there is not lost. */
export function SignInAgain({ email }: { email: string }) {
  const [open, setOpen] = useState(false)
  const [password, setPassword] = useState('')
  const client = useQueryClient()
  useEffect(() => onSignedOut(() => setOpen(true)), [])
  return (
    <Dialog open={open} onClose={() => setOpen(false)} title="Sign in again">
      <p>Your session has ended. What you typed is still on the page behind; after signing in, do the act again.</p>
      <Suspense fallback={<Waiting what="the form" lines={2} />}>
        <SignInForm
          email={email}
          fixedEmail
          onEmail={() => {}}
          password={password}
          onPassword={setPassword}
          onSignedIn={() => {
            setPassword('')
            setOpen(false)
            void client.invalidateQueries()
          }}
        />
      </Suspense>
    </Dialog>
  )
}
