import { useQueryClient } from '@tanstack/react-query'
import { useEffect, useState, useSyncExternalStore } from 'react'
import type { ChangeView } from '../../../shared/contract/changes.ts'
import { DraftKeeper } from './draft-keeper.ts'
import { draftStorage } from './draft-storage.ts'
import { saveText, saveValues } from './mutations.ts'
import { acceptChange, changeQuery } from './queries.ts'

/** The draft under the hands of one person. Key the component by change, so that each has its own. */
export function useDraft(view: ChangeView, personId: number) {
  const client = useQueryClient()
  const [keeper] = useState(() => {
    const query = changeQuery(view.key)
    return new DraftKeeper({
      view,
      storage: draftStorage(personId, view.key),
      sender: {
        values: (edits) => saveValues(view.key, edits),
        text: (text, ifMatch) => saveText(view.key, text, ifMatch),
        fresh: () => client.fetchQuery({ ...query, staleTime: 0 }),
      },
      onView: (next) => void acceptChange(client, next),
    })
  })
  useEffect(() => keeper.start(), [keeper])
  useEffect(() => keeper.accept(view), [keeper, view])
  const state = useSyncExternalStore(keeper.subscribe, keeper.getState)
  return { keeper, state }
}
