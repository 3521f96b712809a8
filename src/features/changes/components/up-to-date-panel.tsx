import { useState } from 'react'
import type { UseQueryResult } from '@tanstack/react-query'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import type { Decision } from '../../../../shared/parameters/three-way.ts'
import { Region } from '../../../components/layout/region.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { count } from '../../../lib/format.ts'
import { contentWords, placeWords, unitOfPlace } from '../place-words.ts'
import type { OutOfDate } from '../queries.ts'
import type { Schemas } from '../value-cells.ts'

export interface UpToDatePanelProps {
  query: UseQueryResult<OutOfDate>
  baseVersion: string | null
  sets: readonly MachineSet[]
  schemas: Schemas
  /** the change is submitted or approved: what was signed becomes void */
  signed: boolean
  onBring: (decisions: Decision[]) => void
  pending: boolean
  problem: unknown
}

/** Another release came meanwhile: what both altered is decided here, value by value; the rest follows by itself. */
export function UpToDatePanel({ query, baseVersion, sets, schemas, signed, onBring, pending, problem }: UpToDatePanelProps) {
  const [kept, setKept] = useState<Readonly<Record<string, Decision['keep']>>>({})
  return (
    <section aria-label="bring up to date" className="my-4 rounded border border-plum bg-plum-wash px-4 py-3">
      <Region query={query} what="the newer release" lines={2}>
        {({ newest, conflicts }) => {
          const open = conflicts.filter((c) => !Object.hasOwn(kept, c.pointer)).length
          return (
            <>
              <p className="font-medium">
                Release <span className="num">{newest}</span> came after <span className="num">{baseVersion ?? 'nothing'}</span>, which this change is from.
              </p>
              <p className="text-13">
                {conflicts.length === 0 ? 'Nothing of it touches what is altered here.' : `${count(conflicts.length, 'place')} altered in both: decide which stays.`} The check runs again{signed ? ', the change goes back to draft, and what was signed is void' : ''}.
              </p>
              {conflicts.map((c) => (
                <fieldset key={c.pointer} className="mt-2 border-t border-hairline pt-2 text-13">
                  <legend className="float-left mr-4 font-medium">{placeWords(c.pointer, sets, schemas)}</legend>
                  <span className="mr-4 text-ink-2">
                    was <span className="num">{contentWords(c.base, c.pointer)}</span> {unitOfPlace(c.pointer, schemas)}
                  </span>
                  {(['yours', 'theirs'] as const).map((side) => (
                    <label key={side} className="mr-4 inline-flex items-baseline gap-2">
                      <input type="radio" name={c.pointer} checked={kept[c.pointer] === side} onChange={() => setKept({ ...kept, [c.pointer]: side })} />
                      <span>
                        {side === 'yours' ? 'this change' : newest}: <span className="num">{contentWords(c[side], c.pointer)}</span>
                      </span>
                    </label>
                  ))}
                </fieldset>
              ))}
              <Button className="mt-3" pending={pending} unavailable={open > 0 ? `${count(open, 'place')} still to decide.` : null} onClick={() => onBring(conflicts.map((c) => ({ pointer: c.pointer, keep: kept[c.pointer] })))}>
                Bring up to date on {newest}
              </Button>
            </>
          )
        }}
      </Region>
      <ProblemPanel className="mt-2" problem={problem} />
    </section>
  )
}
