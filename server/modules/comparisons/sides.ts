import type { SideKind } from './side.ts'
import { changeSide } from './sides/change-side.ts'
import { readBackSide } from './sides/read-back-side.ts'
import { releaseSide } from './sides/release-side.ts'
import { revisionSide } from './sides/revision-side.ts'

/** Everything that can be compared, in the order in which it is offered. */
export const sideKinds: readonly SideKind[] = [releaseSide, changeSide, revisionSide, readBackSide]
