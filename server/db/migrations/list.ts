import { Migration20261201110006 } from './20261201110006-foundation.ts'
import { Migration20261201110100 } from './20261201110100-write-once.ts'
import { Migration20261201110743 } from './20261201110743-firmware-writers.ts'
import { Migration20261201111026 } from './20261201111026-link-asked-by.ts'
import { Migration20261201111901 } from './20261201111901-ledger-filters.ts'
import { Migration20261201120731 } from './20261201120731-joint-analyses.ts'
import { Migration20261201120833 } from './20261201120833-boards-and-bench-keys.ts'
import { Migration20261201121144 } from './20261201121144-kits-and-keys.ts'
import { Migration20261201123140 } from './20261201123140-read-marks-and-comments.ts'
import { Migration20261201123623 } from './20261201123623-ledger-checkpoints.ts'
import { Migration20261201135526 } from './20261201135526-ledger-counts.ts'
import { Migration20261201142944 } from './20261201142944-hash-indexes.ts'
import { Migration20261201143059 } from './20261201143059-second-factor.ts'
import { Migration20261201144454 } from './20261201144454-evidence-and-mail-choices.ts'

/** Every migration in order. Classes, not files: the bundle carries them. */
export const migrations = [
  { name: '20261201110006-foundation', class: Migration20261201110006 },
  { name: '20261201110100-write-once', class: Migration20261201110100 },
  { name: '20261201110743-firmware-writers', class: Migration20261201110743 },
  { name: '20261201111026-link-asked-by', class: Migration20261201111026 },
  { name: '20261201111901-ledger-filters', class: Migration20261201111901 },
  { name: '20261201120731-joint-analyses', class: Migration20261201120731 },
  { name: '20261201120833-boards-and-bench-keys', class: Migration20261201120833 },
  { name: '20261201121144-kits-and-keys', class: Migration20261201121144 },
  { name: '20261201123140-read-marks-and-comments', class: Migration20261201123140 },
  { name: '20261201123623-ledger-checkpoints', class: Migration20261201123623 },
  { name: '20261201135526-ledger-counts', class: Migration20261201135526 },
  { name: '20261201142944-hash-indexes', class: Migration20261201142944 },
  { name: '20261201143059-second-factor', class: Migration20261201143059 },
  { name: '20261201144454-evidence-and-mail-choices', class: Migration20261201144454 },
]
