import type { EntityManager } from '@mikro-orm/core'
import type { Change } from '../changes/change.entity.ts'
import { Evidence } from './evidence.entity.ts'

/** What a change's content says of its evidence: by joint and hash, the file as sent and the columns as read from it. Logs not read yet, or removed, are none. */
export async function evidenceOf(em: EntityManager, change: Change): Promise<{ joint: string; sha256: string; columns: string }[]> {
  const all = await em.find(Evidence, { change, readAt: { $ne: null }, removedAt: null }, { orderBy: { number: 'asc' } })
  return all.map((e) => ({ joint: e.jointKey, sha256: e.sha256, columns: e.columnsSha256! })).sort((a, b) => (a.joint + a.sha256 < b.joint + b.sha256 ? -1 : 1))
}
