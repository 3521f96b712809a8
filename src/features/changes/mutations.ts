import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { ChangeView, DescribeChange, DraftChange } from '../../../shared/contract/changes.ts'
import type { Edit } from '../../../shared/parameters/edits.ts'
import type { Decision } from '../../../shared/parameters/three-way.ts'
import { act } from '../../lib/api-client.ts'
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

type On = Pick<ChangeView, 'key' | 'revision'>

export const useDescribeChange = (change: On) =>
  useChangeAct((body: DescribeChange) => act<ChangeView>({ method: 'PATCH', path: at(change.key), body, ifMatch: change.revision }))

export const useSubmitChange = (change: On) => useChangeAct(() => act<ChangeView>({ path: `${at(change.key)}/submit`, ifMatch: change.revision }))

export const useCancelChange = (change: On) => useChangeAct((body: { reason: string }) => act<ChangeView>({ path: `${at(change.key)}/cancel`, body, ifMatch: change.revision }))

export const useGoBackTo = (change: On) => useChangeAct((point: number) => act<ChangeView>({ path: `${at(change.key)}/back`, body: { point }, ifMatch: change.revision }))

export const useInviteWriter = (change: On) => useChangeAct((person: number) => act<ChangeView>({ path: `${at(change.key)}/writers`, body: { person } }))

export const useBringUpToDate = (change: On) =>
  useChangeAct((decisions: Decision[]) => act<ChangeView>({ path: `${at(change.key)}/up-to-date`, body: { decisions }, ifMatch: change.revision }))
