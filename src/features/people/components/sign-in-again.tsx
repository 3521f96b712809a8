import { useQueryClient } from '@tanstack/react-query'
import { useEffect, useState } from 'react'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { onSignedOut } from '../../../lib/api-client.ts'
import { SignInForm } from './sign-in-form.tsx'

/** Comes over the page when the session has ended, so that what was typed there is not lost. */
export function SignInAgain({ email }: { email: string }) {
  const [open, setOpen] = useState(false)
  const [password, setPassword] = useState('')
  const client = useQueryClient()
  useEffect(() => onSignedOut(() => setOpen(true)), [])
  return (
    <Dialog open={open} onClose={() => setOpen(false)} title="Sign in again">
      <p>Your session has ended. What you typed is still on the page behind; after signing in, do the act again.</p>
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
    </Dialog>
  )
}
