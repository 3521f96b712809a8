import type { UseQueryResult } from '@tanstack/react-query'
import type { DraftPointView } from '../../../../shared/contract/changes.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { Region } from '../../../components/layout/region.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { EmptyState } from '../../../components/ui/empty-state.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'
import { contentWords, placeWords, unitOfPlace, wholeWords } from '../place-words.ts'
import type { Schemas } from '../value-cells.ts'

export interface DraftPointsDialogProps {
  query: UseQueryResult<DraftPointView[]>
  sets: readonly MachineSet[]
  schemas: Schemas
  /** null: only to look at */
  onGoBack: ((point: number) => void) | null
  onClose: () => void
  pending: boolean
  problem: unknown
}

/** Every save of the draft, newest first, with what it altered; any of them can be gone back to, and the way back is a draft point too. */
export function DraftPointsDialog({ query, sets, schemas, onGoBack, onClose, pending, problem }: DraftPointsDialogProps) {
  return (
    <Dialog open wide busy={pending} onClose={onClose} title="Draft points" actions={<Button onClick={onClose}>Close</Button>}>
      <ProblemPanel problem={problem} />
      <Region query={query} what="the draft points" isEmpty={(points) => points.length === 0} empty={<EmptyState title="No draft point yet" />}>
        {(points) => (
          <ol className="max-h-[50vh] overflow-y-auto" aria-label="draft points">
            {points.map((p, i) => (
              <li key={p.number} className="grid grid-cols-[3ch_1fr_auto] items-start gap-x-3 border-t border-hairline py-[6px] text-13 first:border-0">
                <span className="num text-ink-2">{p.number}</span>
                <div>
                  <span>{p.by}</span>{' '}
                  <span className="text-ink-2">
                    <Time at={p.at} style="long" />
                  </span>
                  <ul className="text-12 text-ink-2">
                    {p.edits.length === 0 && <li>{p.number === 1 ? 'as it was drafted' : 'comments or layout only'}</li>}
                    {p.edits.slice(0, 4).map((e) => (
                      <li key={e.pointer}>
                        {wholeWords(e) ?? (
                          <>
                            {placeWords(e.pointer, sets, schemas)}: <span className="num">{contentWords(e.from, e.pointer)}</span>
                            <Arrow />
                            <span className="num">{contentWords(e.to, e.pointer)}</span> {unitOfPlace(e.pointer, schemas)}
                          </>
                        )}
                      </li>
                    ))}
                    {p.edits.length > 4 && <li>and {count(p.edits.length - 4, 'place')} more</li>}
                  </ul>
                </div>
                {i === 0 ? (
                  <span className="text-12 text-ink-2">as it stands</span>
                ) : (
                  onGoBack && (
                    <Button small pending={pending} onClick={() => onGoBack(p.number)}>
                      Go back to {p.number}
                    </Button>
                  )
                )}
              </li>
            ))}
          </ol>
        )}
      </Region>
    </Dialog>
  )
}
