import { PasswordField } from '../../../components/ui/password-field.tsx'
import { passwordHelp } from '../password-rules.ts'
import type { newPasswordProblem } from '../password-rules.ts'

export interface NewPasswordFieldsProps {
  next: string
  again: string
  onNext: (text: string) => void
  onAgain: (text: string) => void
  /** Shown after the form was sent once. */
  problem: ReturnType<typeof newPasswordProblem>
  /** The server's word on the password. */
  refused: string | null
}

/** A new password, twice. */
export function NewPasswordFields({ next, again, onNext, onAgain, problem, refused }: NewPasswordFieldsProps) {
  return (
    <>
      <PasswordField label="New password" purpose="new" help={passwordHelp} value={next} onChange={onNext} error={problem?.field === 'next' ? problem.words : refused} />
      <PasswordField label="The same again" purpose="new" value={again} onChange={onAgain} error={problem?.field === 'again' ? problem.words : null} />
    </>
  )
}
