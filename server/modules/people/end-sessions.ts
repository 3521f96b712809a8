import type { EntityManager } from '@mikro-orm/core'
import type { Person } from './person.entity.ts'
import { SessionRecord } from './session.entity.ts'

/** Ends every session of a person, at once, but for the one named. @returns how many ended */
export const endSessions = (em: EntityManager, person: Person, except: { idHash: string } | null = null): Promise<number> =>
  em.nativeDelete(SessionRecord, { person, ...(except ? { idHash: { $ne: except.idHash } } : {}) })
