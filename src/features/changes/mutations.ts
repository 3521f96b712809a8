import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { ChangeView, DescribeChange, DraftChange } from '../../../shared/contract/changes.ts'
import { same, type Edit } from '../../../shared/parameters/edits.ts'
import type { Decision } from '../../../shared/parameters/three-way.ts'
import { act, ApiProblem, get } from '../../lib/api-client.ts'
import { acceptChange, changesQuery } from './queries.ts'

const at = (change: string) => `/changes/${encodeURIComponent(change)}`

/** Saving as one types; the keeper orders these and takes up their answers. */
export const saveValues = (change: string, edits: readonly Edit[]) => act<ChangeView>({ method: 'PATCH', path: `${at(change)}/values`, body: { edits } })
export const saveText = (change: string, text: string, ifMatch: number) => act<ChangeView>({ method: 'PUT', path: `${at(change)}/text`, body: { text }, ifMatch })

export function useDraftChange() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: DraftChange) => act<{ key: string }>({ path: '/changes', body }),
    onSuccess: () => client.invalidateQueries({ queryKey: changesQuery().queryKey.slice(0, 2) }),
  })
}

/** An act on one change, decided on the revision shown; its answer is the change as it stands now. */
function useChangeAct<V>(perform: (variables: V) => Promise<ChangeView>) {
  const client = useQueryClient()
  return useMutation({ mutationFn: perform, onSuccess: (view) => acceptChange(client, view) })
}

/** The change as an act is decided on it: as shown, or, while it is edited, once everything typed is saved. */
export type Current = () => ChangeView | Promise<ChangeView>

const revised = (body: unknown, ifMatch: number) => ({ body, ifMatch })

/**
 * Title, reason, concessions. When something else of the change was saved meanwhile it is done again on that state; not when the very
 * field was altered, which its writer has to see first.
 */
async function describeSeen(seen: ChangeView, body: DescribeChange): Promise<ChangeView> {
  const patch = (ifMatch: number) => act<ChangeView>({ method: 'PATCH', path: at(seen.key), ...revised(body, ifMatch) })
  try {
    return await patch(seen.revision)
  } catch (error) {
    if (!(error instanceof ApiProblem) || error.code !== 'precondition-failed') throw error
    const fresh = await get<ChangeView>(at(seen.key))
    const untouched = (Object.keys(body) as (keyof DescribeChange)[]).every((field) => same(fresh[field], seen[field]))
    if (!untouched) throw error
    return patch(fresh.revision)
  }
}

export const useDescribeChange = (current: Current) => useChangeAct(async (body: DescribeChange) => describeSeen(await current(), body))

/** An act decided on the very revision shown. */
const on = async (current: Current, name: string, body: unknown) => {
  const change = await current()
  return act<ChangeView>({ path: `${at(change.key)}/${name}`, ...revised(body, change.revision) })
}

export const useSubmitChange = (current: Current) => useChangeAct(() => on(current, 'submit', {}))
export const useCancelChange = (current: Current) => useChangeAct((body: { reason: string }) => on(current, 'cancel', body))
export const useGoBackTo = (current: Current) => useChangeAct((point: number) => on(current, 'back', { point }))
export const useInviteWriter = (change: string) => useChangeAct((person: number) => act<ChangeView>({ path: `${at(change)}/writers`, body: { person } }))
export const useBringUpToDate = (current: Current) => useChangeAct((decisions: Decision[]) => on(current, 'up-to-date', { decisions }))
