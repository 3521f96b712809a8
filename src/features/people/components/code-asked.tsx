import { lazy, Suspense, useEffect, useState } from 'react'
import { onCodeAsked } from '../../../lib/api-client.ts'

// Needed before a signature, where the workplace asks for it, and not before.
const EnterCode = lazy(() => import('./enter-code.tsx'))

/** Comes over the page when the workplace asks for a code before a signature; what was typed stays behind it. */
export function CodeAsked() {
  const [open, setOpen] = useState(false)
  useEffect(() => onCodeAsked(() => setOpen(true)), [])
  return open ? (
    <Suspense>
      <EnterCode onClose={() => setOpen(false)} />
    </Suspense>
  ) : null
}
