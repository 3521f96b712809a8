import type { SqlEntityManager } from '@mikro-orm/sqlite'
import type { Orm } from '../../db/orm.ts'
import type { ResultStore, StoredOutcome } from '../../jobs/results.ts'
import { JointAnalysis } from './joint-analysis.entity.ts'

/** SQLite binds at most 32766 values; a machine has 1000 joints with three analyses on two sides. */
const atOnce = 500

/** Results of analyses in the database, each written once. */
export const analysisStore = (orm: Orm, now: () => Date): ResultStore => ({
  async load(hashes) {
    const found = new Map<string, StoredOutcome>()
    for (let k = 0; k < hashes.length; k += atOnce)
      for (const row of await orm.em.fork().find(JointAnalysis, { hash: { $in: hashes.slice(k, k + atOnce) } }, { disableIdentityMap: true })) found.set(row.hash, row.outcome)
    return found
  },
  async save(entries) {
    const rows = [...new Map(entries.map((e) => [e.hash, e])).values()].map(({ hash, kind, outcome }) => ({ hash, kind, outcome, createdAt: now() }))
    // Two requests may have computed the same at once: equal inputs, equal results, the first one stays.
    // Not by upsertMany, which reads back what it has written.
    await (orm.em.fork() as SqlEntityManager).createQueryBuilder(JointAnalysis).insert(rows).onConflict('hash').ignore().execute()
  },
})
