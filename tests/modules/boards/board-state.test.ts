import { describe, expect, it } from 'vitest'
import { boardState, noBoard, type BoardFacts } from '../../../server/modules/boards/board-state.ts'
import { boardStates, type BoardState } from '../../../shared/contract/boards.ts'

const newest = { version: '1.7.0', withdrawn: false }
const old = { version: '1.6.3', withdrawn: false }
const gone = { version: '1.6.2', withdrawn: true }

/** A board as it should be: the newest release on it, at its joint, measured on it, read back. */
const good: BoardFacts = { serial: 'H-0258', benchSet: null, release: newest, known: 'read back', readBack: 'equal', joint: 'R3 yaw', imageOf: 'R3 yaw', newest, measuredOn: { held: 'H-0258', newest: 'H-0258' } }

const cases: [string, Partial<BoardFacts>, BoardState, RegExp][] = [
  ['newest release, read back', {}, 'current', /holds 1\.7\.0, as read back/],
  ['newest release, as recorded', { known: 'recorded', readBack: null }, 'current', /as recorded; it was not read back/],
  ['an older release', { release: old }, 'outdated', /holds 1\.6\.3; 1\.7\.0 is newer/],
  ['an older release while the newest is withdrawn', { release: old, newest: { version: '1.7.0', withdrawn: true } }, 'outdated', /1\.7\.0 is withdrawn, so it waits/],
  ['a withdrawn release', { release: gone }, 'withdrawn release on board', /holds 1\.6\.2, which is withdrawn/],
  ['the newest release, which is withdrawn', { release: { version: '1.7.0', withdrawn: true }, newest: { version: '1.7.0', withdrawn: true } }, 'withdrawn release on board', /must not run/],
  ['a bench set', { benchSet: 'dunlin-47' }, 'bench set on board', /unreleased set of change dunlin-47/],
  ['nothing recorded', { release: null, known: null, readBack: null, imageOf: null }, 'unknown', /what it holds is not recorded/],
  ['nothing recorded, off its joint', { release: null, known: null, readBack: null, imageOf: null, joint: null }, 'unknown', /Nothing is recorded/],
  ['another read-back than recorded', { readBack: 'differs' }, 'read-back differs', /is not 1\.7\.0/],
  ['a joint whose newest values were measured on another board', { measuredOn: { held: 'H-0258', newest: 'H-0300' } }, 'not calibrated for this joint', /1\.7\.0 holds values for R3 yaw that were measured on H-0300/],
  ['values measured on another board in what it holds', { release: old, measuredOn: { held: 'H-0300', newest: 'H-0258' } }, 'not calibrated for this joint', /values of 1\.6\.3 that were measured on H-0300/],
  ['the image of another joint', { imageOf: 'R3 hip' }, 'not calibrated for this joint', /sits at R3 yaw but holds the image of R3 hip/],
  ['a joint whose values name no board', { measuredOn: { held: null, newest: null } }, 'current', /holds 1\.7\.0/],
  ['a serial number in other letters', { measuredOn: { held: 'h-0258', newest: 'h-0258' } }, 'current', /holds 1\.7\.0/],
  ['off its joint, whatever the joints hold', { joint: null, measuredOn: { held: 'H-0300', newest: null } }, 'current', /holds 1\.7\.0/],
  // what comes first when several hold
  ['a bench set before a withdrawn release', { benchSet: 'dunlin-47', release: gone }, 'bench set on board', /dunlin-47/],
  ['a bench set before a read-back that differs', { benchSet: 'dunlin-47', readBack: 'differs' }, 'bench set on board', /dunlin-47/],
  ['a withdrawn release before a read-back that differs', { release: gone, readBack: 'differs' }, 'withdrawn release on board', /1\.6\.2/],
  ['a read-back that differs before another board', { readBack: 'differs', measuredOn: { held: null, newest: 'H-0300' } }, 'read-back differs', /not 1\.7\.0/],
  ['another board before nothing recorded', { release: null, imageOf: null, measuredOn: { held: null, newest: 'H-0300' } }, 'not calibrated for this joint', /measured on H-0300/],
  ['another board before age', { release: old, measuredOn: { held: null, newest: 'H-0300' } }, 'not calibrated for this joint', /measured on H-0300/],
  ['no release at all', { newest: null, release: null, imageOf: null, measuredOn: { held: null, newest: null } }, 'unknown', /not recorded/],
]

describe('the state of a board', () => {
  it.each(cases)('%s', (_name, facts, state, why) => {
    const told = boardState({ ...good, ...facts })
    expect(told.state).toBe(state)
    expect(told.why).toMatch(why)
  })

  it('reaches every state that there is', () => expect(new Set(cases.map(([, , state]) => state))).toEqual(new Set(boardStates)))

  it('is unknown where no board is', () => expect(noBoard('L3 hip')).toEqual({ state: 'unknown', why: 'No board is recorded at L3 hip.' }))
})
