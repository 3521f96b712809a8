import type { ChangeSet, EventSubscriber, FlushEventArgs } from '@mikro-orm/core'
import { ChangeSetType } from '@mikro-orm/core'
import { immutable } from './entities.ts'

const immutableNames = new Set(immutable.map((e) => e.meta.className))

/** Refuses a flush that would alter or delete what is written once. */
export class ImmutabilityGuard implements EventSubscriber {
  onFlush({ uow }: FlushEventArgs): void {
    const bad = uow.getChangeSets().find((set: ChangeSet<object>) => set.type !== ChangeSetType.CREATE && immutableNames.has(set.name))
    if (bad) throw new Error(`${bad.name} rows are written once; this flush would ${bad.type} one.`)
  }
}
