import { randomUUID } from 'node:crypto'
import type { Seat } from './fill.ts'

export interface Sample {
  what: string
  ms: number
  status: number
}

/** Longest and shortest time that a person looks at a page before the next, ms. */
const looks = { least: 400, most: 1600 }

const pages = (joint: string, own: string, n: number): [what: string, path: string][] => [
  ['who is signed in', '/me'],
  ['machine', '/machines/dunlin'],
  ['joint', `/machines/dunlin/joints/${joint}`],
  ['releases', '/releases?machine=dunlin'],
  ['release', `/machines/dunlin/releases/1.${2 + (n % 490)}.0`],
  ['boards', '/boards?machine=dunlin'],
  ['board', `/boards/HB-${String(n % 2000).padStart(5, '0')}`],
  ['ledger', '/ledger'],
  ['ledger, filtered', '/ledger?act=flash+recorded&machine=dunlin'],
  ['changes', '/changes?machine=dunlin'],
  ['own change', `/changes/${own}`],
]

interface Work {
  port: number
  seat: Seat
  joints: readonly string[]
  random: () => number
  until: number
  take: (sample: Sample) => void
}

/** One person for as long as it lasts: reads page after page, and alters a value of a draft of their own with each fifth look. */
export async function work({ port, seat, joints, random, until, take }: Work): Promise<void> {
  const headers = { Cookie: seat.cookie, 'X-Detent-Token': seat.token, 'Content-Type': 'application/json' }
  const timed = async (what: string, method: string, path: string, body?: object): Promise<unknown> => {
    const began = performance.now()
    const response = await fetch(`http://127.0.0.1:${port}/api${path}`, { method, headers: method === 'GET' ? headers : { ...headers, 'Idempotency-Key': randomUUID() }, body: body && JSON.stringify(body) })
    const text = await response.text()
    take({ what, ms: performance.now() - began, status: response.status })
    return text === '' ? null : JSON.parse(text)
  }
  const { key } = (await timed('draft a change', 'POST', '/changes', { machine: 'dunlin', title: `Of ${seat.name}`, reason: 'Tried at the bench.' })) as { key: string }
  const pointer = '/families/knee/values/velocityGain'
  let gain: number | undefined
  for (let n = Math.floor(random() * 1000); performance.now() < until; n += 1) {
    await new Promise((done) => setTimeout(done, looks.least + random() * (looks.most - looks.least)))
    if (n % 5 === 0) {
      const to = Math.round((2 + random()) * 1000) / 1000
      await timed('save a value', 'PATCH', `/changes/${key}/values`, { edits: [gain === undefined ? { pointer, from: startingGain, to } : { pointer, from: gain, to }] })
      gain = to
    } else {
      const all = pages(joints[Math.floor(random() * joints.length)], key, n)
      const [what, path] = all[Math.floor(random() * all.length)]
      await timed(what, 'GET', path)
    }
  }
}

/** The knees' velocity gain in the release that every draft begins from; read by whoever starts the load. */
let startingGain: unknown
export const beginFrom = (value: unknown) => void (startingGain = value)

export const percentile = (sorted: readonly number[], p: number): number => sorted[Math.min(sorted.length - 1, Math.floor((p / 100) * sorted.length))] ?? NaN
