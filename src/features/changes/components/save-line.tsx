import type { ReactNode } from 'react'
import { Time } from '../../../components/ui/time.tsx'
import type { DraftState } from '../draft-keeper.ts'

export interface SaveLineProps {
  state: Pick<DraftState, 'saving' | 'savedAt' | 'canUndo' | 'canRedo' | 'view'>
  onUndo: () => void
  onRedo: () => void
  onRetry: () => void
  onPoints: () => void
  /** who else writes */
  writers: ReactNode
}

/** The quiet line below the editor: saved when, undo and redo, draft points, who writes too. */
export function SaveLine({ state, onUndo, onRedo, onRetry, onPoints, writers }: SaveLineProps) {
  return (
    <div className="mt-4 flex flex-wrap items-baseline gap-x-4 gap-y-1 border-t border-hairline pt-2 text-13 text-ink-2">
      <span role="status">
        <Saved state={state} onRetry={onRetry} />
      </span>
      <LineButton off={!state.canUndo} onClick={onUndo} keys="Control+Z">
        undo
      </LineButton>
      <LineButton off={!state.canRedo} onClick={onRedo} keys="Control+Shift+Z">
        redo
      </LineButton>
      <button type="button" className="link" onClick={onPoints}>
        draft points
      </button>
      {writers}
    </div>
  )
}

function Saved({ state, onRetry }: { state: SaveLineProps['state']; onRetry: () => void }) {
  if (state.saving === 'lost')
    return (
      <>
        <span className="text-plum">not sent: no answer. Kept in this browser, tried again by itself.</span>{' '}
        <button type="button" className="link" onClick={onRetry}>
          try now
        </button>
      </>
    )
  if (state.saving === 'halted') return <span className="text-oxide">not saved: it waits for you above</span>
  if (state.saving === 'unread') return <span className="text-oxide">the text is not saved: lines to correct</span>
  if (state.saving === 'sending' || state.saving === 'waiting') return <>saving</>
  return (
    <>
      saved <Time at={state.savedAt ?? state.view.alteredAt} style={state.savedAt === null ? 'short' : 'clock'} />
    </>
  )
}

function LineButton({ off, onClick, keys, children }: { off: boolean; onClick: () => void; keys: string; children: string }) {
  return (
    <button type="button" className={off ? 'border-0 bg-transparent p-0 text-ink-2' : 'link'} aria-disabled={off || undefined} aria-keyshortcuts={keys} onClick={() => off || onClick()}>
      {children}
    </button>
  )
}
