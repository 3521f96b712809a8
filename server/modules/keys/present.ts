import type { EntityManager } from '@mikro-orm/core'
import type { WorkplaceKeysView } from '../../../shared/contract/keys.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { ReleaseKit } from '../releases/release-kit.entity.ts'
import { WorkplaceKey } from './workplace-key.entity.ts'

/** Every public key of the workplace, newest first; each held until the next began. */
export async function presentKeys(em: EntityManager, held: readonly HeldRole[]): Promise<WorkplaceKeysView> {
  const rows = await em.find(WorkplaceKey, {}, { orderBy: { id: 'desc' }, populate: ['madeBy'] })
  const keys = await Promise.all(
    rows.map(async (row, i) => ({
      keyId: row.keyId,
      publicKey: row.publicKey,
      from: row.from.toISOString(),
      until: i === 0 ? null : rows[i - 1].from.toISOString(),
      madeBy: row.madeBy?.name ?? null,
      releases: await em.count(ReleaseKit, { keyId: row.keyId }),
    })),
  )
  return { keys, may: { rotate: may(held, 'keep keys', null) } }
}
