import { queryOptions } from '@tanstack/react-query'
import type { ReleaseSummary, ReleaseView } from '../../../shared/contract/releases.ts'
import { get, withQuery } from '../../lib/api-client.ts'

const part = encodeURIComponent
export const releasePath = (machine: string, version: string) => `/machines/${part(machine)}/releases/${part(version)}`

export const releasesQuery = (machine?: string) => queryOptions({ queryKey: ['releases', 'list', machine ?? ''], queryFn: ({ signal }) => get<ReleaseSummary[]>(withQuery('/releases', { machine }), { signal }) })

export const releaseQuery = (machine: string, version: string) => queryOptions({ queryKey: ['releases', 'one', machine, version], queryFn: ({ signal }) => get<ReleaseView>(releasePath(machine, version), { signal }) })
