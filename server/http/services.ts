import type { Config } from '../config.ts'
import type { Orm } from '../db/orm.ts'
import type { JobBoard } from '../jobs/job-board.ts'

/** What acts need besides the database: made once in app.ts, replaced in tests. */
export interface Services {
  config: Config
  orm: Orm
  /** the present, so that tests and the demo can set it */
  now: () => Date
  /** computes analyses away from the event loop, and remembers them */
  checks: JobBoard
  /** told after an act queued mail, so that it is sent soon */
  mailQueued: () => void
}
