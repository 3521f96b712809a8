import { useState } from 'react'

export interface TitleFieldProps {
  title: string
  onSave: (title: string) => void
  error: string | null
}

/** The title, edited where it stands. Enter or leaving saves it, Esc takes it back; an empty one is not taken. */
export function TitleField({ title, onSave, error }: TitleFieldProps) {
  const [typed, setTyped] = useState<string | null>(null)
  const empty = typed !== null && typed.trim() === ''
  const save = () => {
    if (typed !== null && !empty && typed.trim() !== title) onSave(typed.trim())
    if (!empty) setTyped(null)
  }
  const words = empty ? 'A change needs a title; the one before is kept.' : error
  return (
    <h1 className="max-sm:text-20">
      <input
        aria-label="title of the change"
        className="-mx-1 w-full rounded border border-transparent bg-transparent px-1 hover:border-hairline focus:border-rule"
        maxLength={120}
        value={typed ?? title}
        aria-invalid={words ? true : undefined}
        aria-describedby={words ? 'title-words' : undefined}
        onChange={(e) => setTyped(e.target.value)}
        onBlur={save}
        onKeyDown={(e) => {
          if (e.key === 'Enter') e.currentTarget.blur()
          if (e.key === 'Escape') setTyped(null)
        }}
      />
      {words && (
        <span id="title-words" role="alert" className="field-error block font-normal tracking-normal">
          {words}
        </span>
      )}
    </h1>
  )
}
