import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { Button } from '../../../components/ui/button.tsx'
import type { Keep, ValueConflict } from '../edit-batches.ts'
import { contentWords, placeWords, unitOfPlace } from '../place-words.ts'
import type { Schemas } from '../value-cells.ts'

export interface ConflictsPanelProps {
  conflicts: readonly ValueConflict[]
  sets: readonly MachineSet[]
  schemas: Schemas
  /** who saved last at a place; null when nobody knows yet */
  whoAt: (pointer: string) => string | null
  onDecide: (conflict: ValueConflict, keep: Keep) => void
}

/** Values that somebody else saved while this person typed: both shown, one stays. Announced when it appears. */
export function ConflictsPanel({ conflicts, sets, schemas, whoAt, onDecide }: ConflictsPanelProps) {
  return (
    <div role="alert" className="grid gap-3">
      {conflicts.map((c) => {
        const who = whoAt(c.pointer) ?? 'Somebody else'
        const unit = unitOfPlace(c.pointer, schemas)
        return (
          <section key={c.pointer} aria-label={`conflict at ${placeWords(c.pointer, sets, schemas)}`} className="rounded border border-plum bg-plum-wash px-4 py-3">
            <p className="font-medium">{who} set this value while you typed.</p>
            <p className="text-13">{placeWords(c.pointer, sets, schemas)}</p>
            <p className="mt-1 flex flex-wrap gap-x-5 text-13">
              <span>
                theirs <span className="num font-medium">{contentWords(c.now, c.pointer)}</span> <span className="unit">{unit}</span>
              </span>
              <span>
                yours <span className="num font-medium">{contentWords(c.yours, c.pointer)}</span> <span className="unit">{unit}</span>
              </span>
            </p>
            <div className="mt-2 flex gap-2">
              <Button small onClick={() => onDecide(c, 'theirs')}>
                Keep theirs
              </Button>
              <Button small onClick={() => onDecide(c, 'mine')}>
                Set mine
              </Button>
            </div>
          </section>
        )
      })}
    </div>
  )
}
