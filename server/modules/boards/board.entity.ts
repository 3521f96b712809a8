import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { HowKnown } from '../../../shared/contract/boards.ts'
import { DomainError } from '../../http/errors.ts'
import { Joint } from '../machines/joint.entity.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Release } from '../releases/release.entity.ts'

/** One physical servo board: where it sits and what it holds, as recorded or as read back. Its history stands in BoardEvent. */
export const Board = defineEntity({
  name: 'Board',
  properties: {
    id: p.integer().primary(),
    serial: p.string().length(40),
    /** the serial number in lower case: two that differ in case alone are one board */
    serialKey: p.string().length(40).unique(),
    machine: () => p.manyToOne(Machine).index(),
    /** null: off its joint */
    joint: () => p.manyToOne(Joint).nullable().unique(),
    firmware: p.string().length(80).nullable(),
    release: () => p.manyToOne(Release).nullable(),
    /** joint whose image of that release it holds */
    imageOf: () => p.manyToOne(Joint).nullable(),
    known: p.string().$type<HowKnown>().nullable(),
    knownAt: p.datetime().nullable(),
    knownBy: p.string().length(120).nullable(),
    /** change whose unreleased image it was given; stays until it is read back equal to a release */
    benchSet: p.string().length(60).nullable(),
    /** of the last read-back since it was flashed; null: not read back */
    readBack: p.string().$type<'equal' | 'differs'>().nullable(),
    createdAt: p.datetime(),
    retiredAt: p.datetime().nullable(),
  },
})
export type Board = InferEntity<typeof Board>

/** Serial numbers are told apart without regard to case, as scanners and people type them. */
export const serialKey = (serial: string) => serial.toLowerCase()
export const sameSerial = (a: string, b: string) => serialKey(a) === serialKey(b)

export interface Held {
  release: Release
  imageOf: Joint
  firmware: string
}

interface Saying {
  by: string
  at: Date
}

/** @throws DomainError wrong-state for a retired board */
export function mustBeInUse(board: Board, act: string) {
  if (board.retiredAt) throw new DomainError('wrong-state', `Board ${board.serial} is retired; it can't be ${act}. Nothing was recorded. Its history stays readable.`)
}

/** A person says that it was flashed: what it held before is gone, and nothing has been read back since. */
export function flash(board: Board, { release, imageOf, firmware }: Held, { by, at }: Saying) {
  mustBeInUse(board, 'recorded as flashed')
  Object.assign(board, { release, imageOf, firmware, known: 'recorded', knownAt: at, knownBy: by, readBack: null })
}

/** Its bytes equal a release's image: that is what it holds, whatever was recorded. */
export function proveEqual(board: Board, { release, imageOf, firmware }: Held, { by, at }: Saying) {
  mustBeInUse(board, 'read back')
  Object.assign(board, { release, imageOf, firmware, known: 'read back', knownAt: at, knownBy: by, readBack: 'equal', benchSet: null })
}

/** Its bytes are not those of the release it is said to hold. */
export function proveDiffers(board: Board, { by, at }: Saying) {
  mustBeInUse(board, 'read back')
  Object.assign(board, { known: 'read back', knownAt: at, knownBy: by, readBack: 'differs' })
}

/** It was given an unreleased image. */
export function takeBenchSet(board: Board, change: string, { by, at }: Saying) {
  mustBeInUse(board, 'given a bench set')
  Object.assign(board, { benchSet: change, known: 'recorded', knownAt: at, knownBy: by, readBack: null })
}

export function seat(board: Board, machine: Machine, joint: Joint | null) {
  mustBeInUse(board, 'moved')
  Object.assign(board, { machine, joint })
}

export function retire(board: Board, at: Date) {
  mustBeInUse(board, 'retired again')
  Object.assign(board, { joint: null, retiredAt: at })
}
