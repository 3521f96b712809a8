import { useEffect, useRef } from 'react'
import type { Find } from '../../../../shared/contract/search.ts'
import { Key } from '../../../components/ui/key.tsx'
import { kindWords } from '../kind-words.ts'
import type { Finds } from '../use-finds.ts'

export interface FindListProps {
  /** the list and its finds are called after it */
  id: string
  finds: Finds
  /** place of the find walked to; -1 for none */
  active: number
  onPick: (find: Find) => void
}

/** The finds under the field, by kind. The focus stays in the field; a press picks. */
export function FindList({ id, finds, active, onPick }: FindListProps) {
  const list = useRef<HTMLDivElement>(null)
  useEffect(() => {
    if (active >= 0) list.current?.querySelector(`[aria-selected='true']`)?.scrollIntoView({ block: 'nearest' })
  }, [active])
  const begins = finds.groups.map((_, i) => finds.groups.slice(0, i).reduce((n, g) => n + g.finds.length, 0))
  return (
    <div className="finds" ref={list}>
      <div role="listbox" id={`${id}-finds`} aria-label="finds">
        {finds.groups.map(({ kind, finds: found }, g) => (
          <div key={kind} role="group" aria-labelledby={`${id}-${kind}`}>
            <div id={`${id}-${kind}`} className="finds-kind" role="presentation">
              {kindWords[kind]}
            </div>
            {found.map((find, i) => {
              const at = begins[g] + i
              return (
                <div
                  key={at}
                  role="option"
                  id={`${id}-${at}`}
                  aria-selected={at === active}
                  className="finds-one"
                  onPointerDown={(event) => event.preventDefault()}
                  onClick={() => onPick(find)}
                >
                  <span>{find.name}</span>
                  <span className="text-12 text-ink-2">{find.note}</span>
                </div>
              )
            })}
          </div>
        ))}
      </div>
      <div className="finds-foot">
        {finds.flat.length === 0 ? (
          finds.told
        ) : (
          <>
            <Key>↑</Key> <Key>↓</Key> walk, <Key>Enter</Key> {active < 0 ? 'shows every find' : 'opens'}
          </>
        )}
      </div>
    </div>
  )
}
