import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { CarryOver, DescribeFirmwareLine, DraftFirmwareVersion, EditFirmwareVersion, FirmwareLineView, FirmwareVersionView, MakeFirmwareLine, SignFirmwareVersion } from '../../../shared/contract/firmware.ts'
import type { ChangeView } from '../../../shared/contract/changes.ts'
import { act } from '../../lib/api-client.ts'
import { useMe } from '../../lib/me.ts'
import { upload } from '../../lib/upload.ts'
import { firmwareVersionQuery } from './queries.ts'

const part = encodeURIComponent

function useStale() {
  const client = useQueryClient()
  return () => Promise.all([['firmware'], ['changes'], ['ledger']].map((queryKey) => client.invalidateQueries({ queryKey })))
}

export function useMakeLine() {
  const stale = useStale()
  return useMutation({ mutationFn: (body: MakeFirmwareLine) => act<FirmwareLineView>({ path: '/firmware', body }), onSuccess: stale })
}

export function useDescribeLine(line: string) {
  const stale = useStale()
  return useMutation({ mutationFn: (body: DescribeFirmwareLine) => act<FirmwareLineView>({ method: 'PATCH', path: `/firmware/${part(line)}`, body }), onSuccess: stale })
}

export function useDraftVersion(line: string) {
  const stale = useStale()
  return useMutation({ mutationFn: (body: DraftFirmwareVersion) => act<FirmwareVersionView>({ path: `/firmware/${part(line)}/versions`, body }), onSuccess: stale })
}

/** Saves a draft over the revision it was read at; what comes back is what the page shows next. */
export function useEditVersion(line: string, version: string) {
  const client = useQueryClient()
  const stale = useStale()
  return useMutation({
    mutationFn: ({ revision, ...body }: EditFirmwareVersion & { revision: number }) => act<FirmwareVersionView>({ method: 'PUT', path: `/firmware/${part(line)}/${part(version)}`, ifMatch: revision, body }),
    onSuccess: (view) => {
      client.setQueryData(firmwareVersionQuery(line, version).queryKey, view)
      return stale()
    },
  })
}

export interface ImageToAttach {
  file: File
  revision: number
  onProgress: (sent: number, total: number) => void
  signal: AbortSignal
}

/** Attaches a firmware image to a draft; what comes back is what the page shows next. */
export function useAttachImage(line: string, version: string) {
  const client = useQueryClient()
  const stale = useStale()
  const { token } = useMe()
  return useMutation({
    mutationFn: ({ file, revision, onProgress, signal }: ImageToAttach) => upload<FirmwareVersionView>({ path: `/firmware/${part(line)}/${part(version)}/image`, field: 'image', file, ifMatch: revision, token, onProgress, signal }),
    onSuccess: (view) => {
      client.setQueryData(firmwareVersionQuery(line, version).queryKey, view)
      return stale()
    },
  })
}

export function useDetachImage(line: string, version: string) {
  const client = useQueryClient()
  const stale = useStale()
  return useMutation({
    mutationFn: (revision: number) => act<FirmwareVersionView>({ method: 'DELETE', path: `/firmware/${part(line)}/${part(version)}/image`, ifMatch: revision }),
    onSuccess: (view) => {
      client.setQueryData(firmwareVersionQuery(line, version).queryKey, view)
      return stale()
    },
  })
}

/** Carries joints over inside a draft; answers the draft as it stands after. */
export function useCarryOver(change: string) {
  return useMutation({ mutationFn: (body: CarryOver) => act<ChangeView>({ path: `/changes/${part(change)}/carry-over`, body }) })
}

export function useSignVersion(line: string, version: string, what: 'publish' | 'retire') {
  const stale = useStale()
  return useMutation({ mutationFn: (body: SignFirmwareVersion) => act<FirmwareVersionView>({ path: `/firmware/${part(line)}/${part(version)}/${what}`, body }), onSuccess: stale })
}
