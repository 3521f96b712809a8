import { queryOptions } from '@tanstack/react-query'
import type { FirmwareLineView, FirmwareVersionView } from '../../../shared/contract/firmware.ts'
import { get } from '../../lib/api-client.ts'

const part = encodeURIComponent

export const firmwareLinesQuery = queryOptions({ queryKey: ['firmware'], queryFn: ({ signal }) => get<FirmwareLineView[]>('/firmware', { signal }) })

export const firmwareVersionQuery = (line: string, version: string) =>
  queryOptions({ queryKey: ['firmware', line, version], queryFn: ({ signal }) => get<FirmwareVersionView>(`/firmware/${part(line)}/${part(version)}`, { signal }) })
