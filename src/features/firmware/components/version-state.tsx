import type { FirmwareVersionSummary } from '../../../../shared/contract/firmware.ts'

/** Draft, published or retired: the ball before its notch, in it, or the notch struck. */
export function VersionState({ state }: { state: FirmwareVersionSummary['state'] }) {
  const colour = { draft: 'text-ink', published: 'text-verdigris', retired: 'text-ink-2' }[state]
  return (
    <span className={`mark ${colour}`}>
      <svg width="30" height="16" viewBox="0 0 30 16" aria-hidden="true">
        <path d="M0 6H14l5 7 5-7h6" fill="none" stroke="currentColor" strokeWidth="1.5" />
        {state === 'draft' && <circle cx="6" cy="2.4" r="3.6" fill="var(--brass)" />}
        {state === 'published' && <circle cx="19" cy="6" r="3.8" fill="currentColor" />}
        {state === 'retired' && <path d="M13 15L25 1" stroke="currentColor" strokeWidth="1.8" />}
      </svg>
      <span>{state}</span>
    </span>
  )
}
