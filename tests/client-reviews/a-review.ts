import type { ChangeView, DraftPointView } from '../../shared/contract/changes.ts'
import type { CommentsView, CommentView } from '../../shared/contract/comments.ts'
import type { Me } from '../../shared/contract/people.ts'
import type { DiffRow, DiffView, EffectsView } from '../../shared/contract/reviews.ts'
import { aChange } from '../client-changes/a-change.ts'
import { aCheck } from '../client-changes/a-check.ts'
import { anApi, rafiq } from '../client-changes/a-desk.tsx'

export const hash = '030d58033f5424db43a43bb81897'.padEnd(64, '0')
export const gain = (before: string, after: string, origin: 'joint' | 'family' = 'family'): DiffRow => ({
  key: `value:${origin}:velocityGain`, hash: 'd'.repeat(64), pointer: '/families/knee/values/velocityGain', parameter: 'velocityGain', title: 'Velocity gain', unit: 'A·s/rad', role: 'velocity.kp', register: { address: 0x24, encoding: 'q7.24' },
  before: { value: before, origin, bytes: '33 33 33 03', number: Number(before) }, after: { value: after, origin: 'family', bytes: '9A 99 99 05', number: Number(after) }, changePercent: (Number(after) / Number(before) - 1) * 100,
})
export const limit: DiffRow = {
  key: 'value:knee:currentLimit', hash: 'e'.repeat(64), pointer: '/families/knee/values/currentLimit', parameter: 'currentLimit', title: 'Current limit', unit: 'A', role: 'current.limit', register: { address: 0x38, encoding: 'u16' },
  before: { value: '2.8', origin: 'family', bytes: 'F0 0A', number: 2.8 }, after: { value: '3.2', origin: 'family', bytes: '80 0C', number: 3.2 }, changePercent: 14.2857,
}
export const diff: DiffView = {
  groups: [{ family: 'knee', joints: ['l1-knee', 'r3-knee'], rows: [gain('3.2', '5.6'), limit], own: [{ joint: 'r3-knee', rows: [gain('2.9', '5.6', 'joint')] }] }],
  joints: [{ key: 'joint:l4-knee', hash: 'f'.repeat(64), pointer: '/joints/l4-knee', joint: 'l4-knee', is: 'removed' }],
  driveTrains: [{ family: 'knee', rows: [{ key: 'drive-train:knee:J_load', hash: 'a'.repeat(64), pointer: '/families/knee/driveTrain/J_load', field: 'J_load', before: '{"value":0.0185,"low":0.013,"high":0.03}', after: '0.02' }] }],
  families: [], buses: [], counts: { values: 4, joints: 2, rows: 5 }, textBefore: '{\n  "a": 1\n}\n', textAfter: '{\n  "a": 2\n}\n',
}
const rowKeys = [...diff.groups.flatMap((g) => [...g.rows, ...g.own.flatMap((o) => o.rows)]), ...diff.joints, ...diff.driveTrains.flatMap((d) => d.rows)].map((r) => r.key)

const effects: EffectsView = {
  effects: [{ row: limit.key, kind: 'effect', effect: { figure: 'torque at the clamp', loop: null, unit: 'N·m', joint: 'l1-knee', before: 5.7, after: 6.51, beforeReads: '', afterReads: '', verdict: 'stable', policy: null } }],
  progress: { done: 1, total: 1, state: 'done', problem: '' },
}

export const yes = { allowed: true } as const
export const no = (why: string) => ({ allowed: false, why }) as const

export const aComment = (over: Partial<CommentView> = {}): CommentView => ({
  number: 1, by: 'Rafiq Sandoval', roles: 'peer reviewer', at: '2026-11-30T14:06:00Z', text: 'Heard on the bench?', on: { kind: 'value', pointer: limit.pointer }, about: 'Current limit, Knee family', named: [], under: null, answered: null, may: { answer: yes }, ...over,
})
export const commentsView = (comments: CommentView[], mayWrite = true): CommentsView => ({ comments, open: comments.filter((c) => c.under === null && c.answered === null).length, may: { write: mayWrite ? yes : no('This takes the role builder.') } })

export interface ReviewToOpen {
  me?: Me
  change?: Partial<ChangeView>
  may?: Partial<ChangeView['may']>
  check?: ReturnType<typeof aCheck>
  /** keys of the rows read; all of them unless said */
  reads?: string[]
  mark?: boolean
  comments?: CommentView[]
  mayWrite?: boolean
  people?: string[]
  points?: DraftPointView[]
}

/** A submitted change, read by its reviewer, with everything that the page asks the server for. */
export function aReview({ me = rafiq, change = {}, may = {}, check = aCheck(), reads = rowKeys, mark = true, comments = [], mayWrite = true, people = [], points = [] }: ReviewToOpen = {}) {
  const base = aChange()
  const view: ChangeView = {
    ...base, state: 'submitted', life: 'submitted', revision: 9, contentHash: hash,
    events: [...base.events, { kind: 'submitted', person: 'Mirela Castanho', at: '2026-11-29T17:24:00Z', note: '' }],
    ...change, may: { ...base.may, edit: no('The change is submitted.'), submit: no('The change is submitted.'), return: yes, signPeerReview: yes, release: no('The change is submitted.'), bringUpToDate: no('It is on the newest release already.'), ...may },
  }
  const person = (name: string, id: number) => ({ id, name, email: null, state: 'active', signingHold: null, roles: [{ id, role: 'controls engineer', machine: null, confirmed: true }], may: {} })
  return anApi(me, {
    'GET /changes/dunlin-47': () => ({ body: view }),
    'GET /changes/dunlin-47/check': { body: check },
    'GET /changes/dunlin-47/diff': { body: diff },
    'GET /changes/dunlin-47/reading': { body: { read: reads, rows: diff.counts.rows, people: [{ name: 'Ingunn Veblen', read: 2 }], may: { mark: mark ? yes : no('You wrote in this change.') } } },
    'GET /changes/dunlin-47/effects': { body: effects },
    'GET /changes/dunlin-47/comments': { body: commentsView(comments, mayWrite) },
    'GET /changes/dunlin-47/points': { body: points },
    'GET /changes/dunlin-47/version': { body: { version: '1.8.0', step: 'minor', because: ['current limit alters'] } },
    'GET /people': { body: { people: people.map(person), may: { invite: no('') } } },
  })
}
