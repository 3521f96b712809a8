import { useState } from 'react'
import { paths } from '../app/paths.ts'
import { DoorPage } from '../components/layout/door-page.tsx'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { Button } from '../components/ui/button.tsx'
import { TextField } from '../components/ui/text-field.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { useAskReset } from '../features/people/mutations.ts'
import { fieldError } from '../lib/api-client.ts'

export function Component() {
  const ask = useAskReset()
  const [email, setEmail] = useState('')
  const [missing, setMissing] = useState(false)
  const back = <TextLink to={paths.signIn()}>Back to signing in</TextLink>
  if (ask.isSuccess)
    return (
      <DoorPage title="Look into your mail">
        <p>If Detent knows {email.trim()}, a link that sets a new password is on its way there. It works once, and soon expires. Until it is used, the old password stays.</p>
        <p className="mt-4">{back}</p>
      </DoorPage>
    )
  return (
    <DoorPage title="Forgotten password">
      <form
        noValidate
        className="grid gap-3"
        onSubmit={(event) => {
          event.preventDefault()
          setMissing(email.trim() === '')
          if (email.trim() !== '' && !ask.isPending) ask.mutate(email.trim())
        }}
      >
        <TextField
          label="E-mail"
          type="email"
          autoComplete="username"
          autoCapitalize="none"
          spellCheck={false}
          help="where the link goes; whoever signs waits for another signer's confirmation afterwards"
          value={email}
          onChange={setEmail}
          error={missing && email.trim() === '' ? 'Write your e-mail address.' : fieldError(ask.error, '/email')}
        />
        <ProblemPanel problem={ask.error} shown={['/email']} />
        <div className="flex flex-wrap items-center gap-4">
          <Button type="submit" kind="primary" pending={ask.isPending}>
            Send the link
          </Button>
          {back}
        </div>
      </form>
    </DoorPage>
  )
}
