import { Mark } from '../components/ui/mark.tsx'

/** Before the first page is there. */
export function FirstWait() {
  return (
    <div role="status" className="grid min-h-dvh place-items-center">
      <Mark size={44} />
      <span className="sr-only">Waiting for Detent.</span>
    </div>
  )
}
