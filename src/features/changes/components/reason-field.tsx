import { useEffect, useRef, useState } from 'react'
import { TextArea } from '../../../components/ui/text-area.tsx'

export interface ReasonFieldProps {
  reason: string
  /** done when it is saved */
  onSave: (reason: string) => Promise<unknown>
  error: string | null
  saving: boolean
}

const PAUSE = 900

/** Why the change is made; saved while one types. What is not saved stays in the field, with the reason beside it. */
export function ReasonField({ reason, onSave, error, saving }: ReasonFieldProps) {
  const [typed, setTyped] = useState<string | null>(null)
  const timer = useRef<ReturnType<typeof setTimeout>>(undefined)
  useEffect(() => () => clearTimeout(timer.current), [])
  const save = (text: string) => {
    clearTimeout(timer.current)
    if (text === reason) return setTyped(null)
    onSave(text).then(
      () => setTyped((now) => (now === text ? null : now)),
      () => {},
    )
  }
  return (
    <TextArea
      label="Reason"
      rows={4}
      maxLength={4000}
      value={typed ?? reason}
      help={saving ? 'saving' : typed !== null && typed !== reason ? 'not saved yet' : 'what was seen, what this does about it, and what keeps it safe'}
      error={error}
      onChange={(text) => {
        setTyped(text)
        clearTimeout(timer.current)
        timer.current = setTimeout(() => save(text), PAUSE)
      }}
      onBlur={() => typed !== null && save(typed)}
    />
  )
}
