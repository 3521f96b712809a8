import { queryOptions } from '@tanstack/react-query'
import type { CarryOverPreview, FirmwareComparisonView, FirmwareLineView, FirmwareVersionView } from '../../../shared/contract/firmware.ts'
import { get, withQuery } from '../../lib/api-client.ts'

const part = encodeURIComponent

export const firmwareLinesQuery = queryOptions({ queryKey: ['firmware'], queryFn: ({ signal }) => get<FirmwareLineView[]>('/firmware', { signal }) })

export const firmwareVersionQuery = (line: string, version: string) =>
  queryOptions({ queryKey: ['firmware', line, version], queryFn: ({ signal }) => get<FirmwareVersionView>(`/firmware/${part(line)}/${part(version)}`, { signal }) })

export const firmwareComparisonQuery = (line: string, from: string, to: string) =>
  queryOptions({ queryKey: ['firmware', line, to, 'since', from], queryFn: ({ signal }) => get<FirmwareComparisonView>(`/firmware/${part(line)}/${part(to)}/since/${part(from)}`, { signal }) })

export interface CarryWish {
  to: string
  joints?: readonly string[]
  family?: string
}

/** What carrying over would do to the draft as it stands: asked anew for each of its revisions. */
export const carryOverQuery = (change: string, revision: number, { to, joints, family }: CarryWish) =>
  queryOptions({
    queryKey: ['carry-over', change, revision, to, joints?.join(',') ?? '', family ?? ''],
    queryFn: ({ signal }) => get<CarryOverPreview>(withQuery(`/changes/${part(change)}/carry-over`, { to, joints: joints?.join(','), family }), { signal }),
    retry: false,
  })
