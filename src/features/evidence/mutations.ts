import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { ColumnMapping, EvidenceView, UseIdentified } from '../../../shared/contract/evidence.ts'
import { act } from '../../lib/api-client.ts'
import { useMe } from '../../lib/me.ts'
import { upload } from '../../lib/upload.ts'
import { at, evidenceQuery } from './queries.ts'

/** Where a log belongs: to a joint, or to a change and one of its joints. */
export type Belonging = { machine: string; joint: string; change?: string }

interface Sending {
  file: File
  onProgress: (sent: number, total: number) => void
  signal: AbortSignal
}

export function useUploadLog() {
  const client = useQueryClient()
  const { token } = useMe()
  return useMutation({
    mutationFn: ({ file, onProgress, signal, belongs: { machine, joint, change } }: Sending & { belongs: Belonging }) =>
      upload<EvidenceView>({ method: 'POST', path: `/${change ? `changes/${encodeURIComponent(change)}` : `machines/${encodeURIComponent(machine)}`}/joints/${encodeURIComponent(joint)}/evidence`, field: 'log', file, token, onProgress, signal }),
    onSuccess: (view) => {
      client.setQueryData(evidenceQuery(view.machine, view.number).queryKey, view)
      return client.invalidateQueries({ queryKey: ['evidence'] })
    },
  })
}

/** An act on one log; its answer is the log as it stands. */
function useLogAct<V>(machine: string, number: number, name: string, bodyOf: (variables: V) => unknown) {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (variables: V) => act<EvidenceView>({ path: `${at(machine, number)}/${name}`, body: bodyOf(variables) }),
    onSuccess: (view) => {
      client.setQueryData(evidenceQuery(machine, number).queryKey, view)
      if (name === 'remove') return client.invalidateQueries({ queryKey: ['evidence'] })
    },
  })
}

export const useReadLog = (machine: string, number: number) => useLogAct(machine, number, 'read', (mapping: ColumnMapping[]) => ({ mapping }))
export const useStopReading = (machine: string, number: number) => useLogAct(machine, number, 'stop', (_: void) => ({}))
export const useRemoveLog = (machine: string, number: number) => useLogAct(machine, number, 'remove', (_: void) => ({}))

export function useUseIdentified(machine: string, number: number) {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: UseIdentified) => act<{ change: string }>({ path: `${at(machine, number)}/use`, body }),
    onSuccess: () => Promise.all([client.invalidateQueries({ queryKey: ['changes'] }), client.invalidateQueries({ queryKey: ['evidence'] })]),
  })
}
