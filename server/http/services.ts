import type { Config } from '../config.ts'
import type { FileStore } from '../db/file-store.ts'
import type { Orm } from '../db/orm.ts'
import type { JobBoard } from '../jobs/job-board.ts'
import type { WorkplaceKeys } from '../modules/keys/workplace-keys.ts'
import type { Seals } from '../modules/people/second-factor/seals.ts'

/** What acts need besides the database: made once in app.ts, replaced in tests. */
export interface Services {
  config: Config
  orm: Orm
  /** the present, so that tests and the demo can set it */
  now: () => Date
  /** computes analyses away from the event loop, and remembers them */
  checks: JobBoard
  /** uploaded files, beside the database */
  files: FileStore
  /** the key that the workplace signs kits with */
  keys: WorkplaceKeys
  /** closes the secrets of second factors, which stand in the database */
  seals: Seals
  /** told after an act queued mail, so that it is sent soon */
  mailQueued: () => void
}
