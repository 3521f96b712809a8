import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { BoardEventKind, ReadBackResult } from '../../../shared/contract/boards.ts'
import { Joint } from '../machines/joint.entity.ts'
import { Person } from '../people/person.entity.ts'
import { Release } from '../releases/release.entity.ts'
import { Board } from './board.entity.ts'

/** One step in the life of a board. Written once. */
export const BoardEvent = defineEntity({
  name: 'BoardEvent',
  properties: {
    id: p.integer().primary(),
    board: () => p.manyToOne(Board).index(),
    kind: p.string().$type<BoardEventKind>(),
    at: p.datetime(),
    person: () => p.manyToOne(Person),
    personName: p.string().length(120),
    /** name of the bench key that spoke for the person */
    benchKey: p.string().length(80).nullable(),
    /** where it sits after it */
    joint: () => p.manyToOne(Joint).nullable().index(),
    /** joint that it left */
    from: () => p.manyToOne(Joint).nullable(),
    release: () => p.manyToOne(Release).nullable().index(),
    note: p.text(),
    readBack: p.json<ReadBackResult>().nullable(),
    /** the dump as uploaded, so that it can be compared again */
    dump: p.uint8array().nullable().lazy(true, false),
  },
})
export type BoardEvent = InferEntity<typeof BoardEvent>
