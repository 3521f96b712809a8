import { queryOptions, type QueryClient } from '@tanstack/react-query'
import type { ChangeSummary, ChangeView, DraftPointView } from '../../../shared/contract/changes.ts'
import type { FirmwareLineView } from '../../../shared/contract/firmware.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { Conflict } from '../../../shared/parameters/three-way.ts'
import { get, withQuery } from '../../lib/api-client.ts'
import type { Schemas } from './value-cells.ts'

const all = ['changes'] as const
const at = (change: string) => `/changes/${encodeURIComponent(change)}`

export const changesQuery = (filter: { machine?: string; state?: string } = {}) =>
  queryOptions({
    queryKey: [...all, 'list', filter],
    queryFn: ({ signal }) => get<ChangeSummary[]>(withQuery('/changes', filter), { signal }),
  })

export const changeQuery = (change: string) =>
  queryOptions({
    queryKey: [...all, 'one', change],
    queryFn: ({ signal }) => get<ChangeView>(at(change), { signal }),
  })

export const draftPointsQuery = (change: string, revision: number) =>
  queryOptions({
    queryKey: [...all, 'points', change, revision],
    queryFn: ({ signal }) => get<DraftPointView[]>(`${at(change)}/points`, { signal }),
    placeholderData: (before) => before,
  })

/** Names of the firmware versions that a set's joints stand on. */
export const firmwareNames = (...sets: MachineSet[]): string[] => [...new Set(sets.flatMap((s) => Object.values(s.joints).map((j) => j.firmware)))].sort()

/** Parameter schemas of every firmware version in the change and its base; read once, since a published version never alters. */
export const schemasQuery = (change: string, names: readonly string[]) =>
  queryOptions({
    queryKey: [...all, 'schemas', change, names],
    queryFn: async ({ signal }) => readSchemas(await get<Record<string, unknown>>(`${at(change)}/schemas`, { signal })),
    staleTime: 300_000,
    placeholderData: (before) => before,
  })

/** A version that can't be read is left out; its joints then show no parameters, and the check says why. */
async function readSchemas(raw: Record<string, unknown>): Promise<Schemas> {
  // The reader comes with the first change that is opened; lists need none.
  const { readParameterSchema } = await import('../../../shared/registers/read-parameter-schema.ts')
  return Object.fromEntries(
    Object.entries(raw).flatMap(([name, json]) => {
      const reading = readParameterSchema(json)
      return reading.kind === 'schema' ? [[name, reading.schema]] : []
    }),
  )
}

/** Published firmware versions, which joints may be moved to: "hinge 2.1.0". */
export const firmwareChoicesQuery = queryOptions({
  queryKey: [...all, 'firmware'],
  queryFn: ({ signal }) => get<FirmwareLineView[]>('/firmware', { signal }),
  select: (lines) => lines.flatMap((l) => l.versions.filter((v) => v.state === 'published').map((v) => `${l.key} ${v.version}`)),
})

export interface OutOfDate {
  conflicts: Conflict[]
  /** version of the newer release; null when the change stands on the newest */
  newest: string | null
}

export const upToDateQuery = (change: string, revision: number) =>
  queryOptions({
    queryKey: [...all, 'up-to-date', change, revision],
    queryFn: ({ signal }) => get<OutOfDate>(`${at(change)}/up-to-date`, { signal }),
  })

/** Takes up the answer of an act: the change as it stands now, and everything that hangs on it read again. */
export async function acceptChange(client: QueryClient, view: ChangeView): Promise<void> {
  await client.cancelQueries({ queryKey: changeQuery(view.key).queryKey })
  const before = client.getQueryData(changeQuery(view.key).queryKey)
  if (!before || view.revision >= before.revision) client.setQueryData(changeQuery(view.key).queryKey, view)
  await client.invalidateQueries({ queryKey: [...all, 'list'] })
}
