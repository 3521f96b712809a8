import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { ReleaseView } from '../../../shared/contract/releases.ts'
import { act } from '../../lib/api-client.ts'
import { releasePath, releaseQuery, releasesQuery } from './queries.ts'

/** Withdraws a release for good: version typed again, and the reason everybody who flashed it is mailed. */
export function useWithdrawRelease(release: Pick<ReleaseView, 'machine' | 'version'>) {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: { version: string; reason: string }) => act({ path: `${releasePath(release.machine, release.version)}/withdraw`, body }),
    onSuccess: () => Promise.all([client.invalidateQueries({ queryKey: releaseQuery(release.machine, release.version).queryKey }), client.invalidateQueries({ queryKey: releasesQuery().queryKey.slice(0, 2) }), client.invalidateQueries({ queryKey: ['machines'] })]),
  })
}
