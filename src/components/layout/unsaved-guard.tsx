import { useEffect } from 'react'
import { useBlocker } from 'react-router'
import { Button } from '../ui/button.tsx'
import { Dialog } from '../ui/dialog.tsx'

/** Asks before a page with unsaved text is left, by a link or by closing it. */
export function UnsavedGuard({ dirty, what, onSave }: { dirty: boolean; what: string; onSave: () => void }) {
  const leaving = useBlocker(({ currentLocation, nextLocation }) => dirty && currentLocation.pathname !== nextLocation.pathname)
  useEffect(() => {
    if (!dirty) return
    const warn = (event: BeforeUnloadEvent) => event.preventDefault()
    window.addEventListener('beforeunload', warn)
    return () => window.removeEventListener('beforeunload', warn)
  }, [dirty])
  const stay = () => leaving.reset?.()
  return (
    <Dialog
      open={leaving.state === 'blocked'}
      onClose={stay}
      title={`${what} is not saved`}
      actions={
        <>
          <Button
            kind="primary"
            onClick={() => {
              stay()
              onSave()
            }}
          >
            Stay and save
          </Button>
          <Button kind="danger" onClick={() => leaving.proceed?.()}>
            Leave it unsaved
          </Button>
          <Button onClick={stay}>Stay</Button>
        </>
      }
    >
      <p>What you typed since it was last saved is lost when you leave this page.</p>
    </Dialog>
  )
}
