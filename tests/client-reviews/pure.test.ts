// @vitest-environment jsdom
import { describe, expect, it } from 'vitest'
import type { ChangeEventView, DraftPointView, SignatureView } from '../../shared/contract/changes.ts'
import type { ReadingView, ValueEffect } from '../../shared/contract/reviews.ts'
import { fitting, nameBegun, named, pieces } from '../../src/features/comments/naming.ts'
import { countAt, threadsOf } from '../../src/features/comments/threads.ts'
import { hunksOf, linesBetween } from '../../src/features/reviews/components/text-diff.tsx'
import { beforeSigning, readWords } from '../../src/features/reviews/before-signing.ts'
import { content } from '../../src/features/reviews/field-content.ts'
import { figureName, missesPolicy, rangeOf, shownEffect } from '../../src/features/reviews/figure-words.ts'
import { historyOf } from '../../src/features/reviews/history-of.ts'
import { presentWords } from '../../src/features/reviews/present-words.ts'
import { titleOf } from '../../src/features/reviews/title-of.ts'
import { isLower, stepBetween } from '../../src/features/reviews/version-step.ts'
import { aComment, diff, gain, limit } from './a-review.ts'

describe('versions', () => {
  it.each([['1.7.0', '1.7.1', 'patch'], ['1.7.0', '1.8.0', 'minor'], ['1.7.0', '2.0.0', 'major'], ['1.7.0', '1.7.0', null], ['1.7.0', '1.6.9', null], ['1.9.0', '1.10.0', 'minor']])('%s to %s is a %s step', (a, b, step) => expect(stepBetween(a, b)).toBe(step))
  it('orders steps', () => expect([isLower('patch', 'minor'), isLower('minor', 'minor'), isLower('major', 'minor')]).toEqual([true, false, false]))
})

describe('stored fields and texts', () => {
  it.each([[null, 'none'], ['"name"', 'name'], ['aft', 'aft'], ['1500', '1\u00a0500'], ['[]', 'none'], ['[{"address":80,"name":"supply watch"}]', 'supply watch']])('shows stored content %s as %s', (text, shown) => expect(content(text)).toBe(shown))

  it('numbers the lines of two texts and folds what is equal', () => {
    const before = Array.from({ length: 20 }, (_, i) => `line ${i}`).join('\n')
    const after = before.replace('line 10', 'line ten')
    const lines = linesBetween(before, after)
    expect(lines.filter((l) => l.kind !== 'same')).toEqual([{ kind: 'gone', text: 'line 10', before: 11, after: null }, { kind: 'new', text: 'line ten', before: null, after: 11 }])
    const { hunks, rest } = hunksOf(lines)
    expect(hunks).toHaveLength(1)
    expect([hunks[0].skipped.length, hunks[0].lines.length, rest.length]).toEqual([7, 8, 6])
  })

  it('calls each row by what it is and whose', () => {
    const names = { joint: (k: string) => k.toUpperCase(), family: () => 'Knee', bus: () => 'Fore' }
    expect([limit.key, gain('2.9', '5.6', 'joint').key, 'joint:l4-knee', 'drive-train:knee:J_load', 'else'].map((k) => titleOf(diff, k, names))).toEqual(['Current limit, Knee family', 'Velocity gain, R3-KNEE', 'L4-KNEE', 'J_load, drive train of the Knee family', 'else'])
  })
})

describe('effects in figures', () => {
  const effect = (over: Partial<ValueEffect>): ValueEffect => ({ figure: 'phase margin', loop: 'velocity', unit: '°', joint: 'l1-knee', before: 55.34, after: 50.41, beforeReads: '', afterReads: '', verdict: 'stable', policy: { limit: 45, forbidden: 'below' }, ...over })

  it('names a margin by its loop', () => expect([figureName(effect({})), figureName(effect({ loop: null, figure: 'torque at the clamp' }))]).toEqual(['velocity phase', 'torque at clamp']))

  it.each([
    [{}, { before: '55.3', after: '50.4', unit: '°' }],
    [{ figure: 'settling, 2 %', unit: 's', before: 0.144, after: 0.112 }, { before: '144', after: '112', unit: 'ms' }],
    [{ figure: 'settling, 2 %', unit: 's', before: 1.2, after: 0.9 }, { before: '1\u00a0200', after: '900', unit: 'ms' }],
    [{ unit: 'N·m', before: 4.5588, after: 5.2101 }, { before: '4.56', after: '5.21', unit: 'N·m' }],
    [{ unit: 'dB', before: null, beforeReads: 'above 60 dB', after: 58.2 }, { before: 'above 60 dB', after: '58.2', unit: 'dB' }],
    [{ unit: 's', before: 0.1, after: null, afterReads: 'does not settle' }, { before: '100', after: 'does not settle', unit: 'ms' }],
  ])('writes both sides in one unit: %j', (over, shown) => expect(shownEffect(effect(over))).toEqual(shown))

  it('knows what misses policy, on either side', () => {
    expect([missesPolicy(effect({ after: 44.9 })), missesPolicy(effect({ after: 45 })), missesPolicy(effect({ after: 16, policy: { limit: 15, forbidden: 'above' } })), missesPolicy(effect({ after: null })), missesPolicy(effect({ policy: null, after: 1 }))]).toEqual([true, false, true, false, false])
  })

  it('draws every figure inside its ruler', () => {
    expect(rangeOf(effect({}))).toEqual({ min: 0, max: 90, scale: 'linear' })
    expect(rangeOf(effect({ unit: 'dB', before: 34, after: 31 }))).toEqual({ min: 0, max: 34, scale: 'linear' })
    expect(rangeOf(effect({ figure: 'bandwidth', unit: 'Hz', before: 20, after: 40 }))).toEqual({ min: 20 / 3, max: 120, scale: 'log' })
    expect(rangeOf(effect({ before: null, after: null }))).toBeNull()
  })
})

describe('before signing', () => {
  const view = (read: number, rows = 24): ReadingView => ({ read: [], rows, people: [{ name: 'Rafiq Sandoval', read }, { name: 'Hedda Lindqvist', read: 2 }], may: { mark: { allowed: true } } })
  const rows = Array.from({ length: 24 }, () => limit)
  const reading = (unread: number, known = rows) => ({ view: view(24 - unread), rows: known, unread: rows.slice(0, unread), kept: true })

  it.each([
    [reading(0), 0, null],
    [reading(1), 0, 'First mark one more row as read.'],
    [reading(6), 1, 'First mark 6 more rows as read and have one open comment answered.'],
    [reading(0), 3, 'First have 3 open comments answered.'],
    [{ ...reading(0), kept: false }, 0, 'Your marks are being kept.'],
    [reading(0), null, 'What you have read is not known yet.'],
    [reading(0, []), 0, 'What you have read is not known yet.'],
  ])('says what is left', (read, comments, words) => expect(beforeSigning(read, comments)).toBe(words))

  it('says who has read how much', () => {
    expect(readWords(view(24))).toBe('Rafiq Sandoval all 24 rows, Hedda Lindqvist 2')
    expect(readWords(view(5))).toBe('Rafiq Sandoval 5 of 24 rows, Hedda Lindqvist 2')
    expect(readWords({ ...view(0), people: [] })).toBe('none of 24 rows')
  })
})

describe('the history', () => {
  const event = (kind: ChangeEventView['kind'], at: string, person = 'Mirela'): ChangeEventView => ({ kind, at, person, note: '' })
  const signature = (at: string, isVoid = true): SignatureView => ({ meaning: 'peer review', statement: '', person: 'Ingunn', at, contentHash: 'x', void: isVoid })
  const point = (number: number, at: string, by = 'Mirela'): DraftPointView => ({ number, at, by, edits: [] })

  it('tells of a void signature at the first step that voided it', () => {
    const events = [event('drafted', '01'), event('peer review', '03'), event('returned', '04'), event('submitted', '05'), event('peer review', '06'), event('brought up to date', '07'), event('cancelled', '08')]
    const steps = historyOf(events, [signature('03'), signature('06'), signature('06', false)], [])
    expect(steps.flatMap((s) => (s.kind === 'event' ? [[s.event.kind, s.voided.map((v) => v.at)]] : []))).toEqual([['drafted', []], ['peer review', []], ['returned', ['03']], ['submitted', []], ['peer review', []], ['brought up to date', ['06']], ['cancelled', []]])
  })

  it('puts draft points between the steps, those of one person in a row together', () => {
    const steps = historyOf([event('drafted', '01'), event('submitted', '05'), event('returned', '06')], [], [point(5, '07'), point(4, '04', 'Tobias'), point(3, '03'), point(2, '02'), point(1, '01')])
    expect(steps.map((s) => (s.kind === 'event' ? s.event.kind : s.points.map((p) => p.number)))).toEqual(['drafted', [1, 2, 3], [4], 'submitted', 'returned', [5]])
  })
})

describe('who has it open', () => {
  it('names each person once with their pages', () => expect(presentWords([{ name: 'Tobias', page: 'values' }, { name: 'Ingunn', page: 'check' }, { name: 'Tobias', page: 'review' }])).toBe('Tobias at the values and at the review, Ingunn at the check'))
})

describe('naming people', () => {
  const people = [{ id: 1, name: 'Rafiq Sandoval' }, { id: 2, name: 'Mirela Castanho' }, { id: 3, name: 'Ann' }, { id: 4, name: 'Anna' }]

  it.each([
    ['Well, @raf', 10, { from: 6, typed: 'raf' }],
    ['@', 1, { from: 0, typed: '' }],
    ['@Rafiq San', 10, { from: 0, typed: 'Rafiq San' }],
    ['none', 4, null],
    ['someone@dunlin', 14, null],
    ['@raf\nmore', 9, null],
    ['@raf and more', 4, { from: 0, typed: 'raf' }],
  ])('finds the name begun in "%s" at %i', (text, caret, begun) => expect(nameBegun(text, caret)).toEqual(begun))

  it('offers people by any word of their name', () => {
    expect(fitting(people, 'san').map((p) => p.id)).toEqual([1])
    expect(fitting(people, '').map((p) => p.id)).toEqual([1, 2, 3, 4])
    expect(fitting(people, 'ann').map((p) => p.id)).toEqual([4])
    expect(fitting(people, 'xyz')).toEqual([])
  })

  it('writes the name out and goes on behind it', () => {
    expect(named('See @raf', { from: 4, typed: 'raf' }, 'Rafiq Sandoval')).toEqual({ text: 'See @Rafiq Sandoval ', caret: 20 })
    expect(named('See @raf, please', { from: 4, typed: 'raf' }, 'Rafiq Sandoval')).toEqual({ text: 'See @Rafiq Sandoval, please', caret: 19 })
    expect(named('@raf x', { from: 0, typed: 'raf' }, 'Rafiq Sandoval')).toEqual({ text: '@Rafiq Sandoval x', caret: 16 })
  })

  it('marks the people named, the longer name first, and no part of a word', () => {
    expect(pieces('@Anna and @ann, @Annabel (x)', ['Ann', 'Anna']).filter((p) => p.named).map((p) => p.text)).toEqual(['@Anna', '@ann'])
    expect(pieces('a.b @C. (D)', ['C. (D)'])).toEqual([{ text: 'a.b ', named: false }, { text: '@C. (D)', named: true }])
    expect(pieces('plain', [])).toEqual([{ text: 'plain', named: false }])
  })
})

describe('comments by place', () => {
  const comments = [aComment(), aComment({ number: 2, under: 1 }), aComment({ number: 3, answered: { by: 'x', at: 'y' } }), aComment({ number: 4, on: { kind: 'finding', finding: 'f' } }), aComment({ number: 5, on: { kind: 'change' } })]
  it('counts what hangs on a place, and what is open of it', () => {
    expect(countAt(comments, { kind: 'value', pointer: limit.pointer })).toEqual({ all: 2, open: 1 })
    expect(countAt(comments, { kind: 'finding', finding: 'f' })).toEqual({ all: 1, open: 1 })
    expect(countAt(comments, { kind: 'finding', finding: 'g' })).toEqual({ all: 0, open: 0 })
    expect(countAt(comments, { kind: 'change' })).toEqual({ all: 1, open: 1 })
  })
  it('puts answers under their head', () => expect(threadsOf(comments).map((t) => [t.head.number, t.under.map((u) => u.number)])).toEqual([[1, [2]], [3, []], [4, []], [5, []]]))
})
