import { describe, expect, it } from 'vitest'
import { FairQueue } from '../../server/jobs/fair-queue.ts'

const drain = (q: FairQueue<string>) => Array.from({ length: q.size }, () => q.take()!)

describe('the fair queue', () => {
  it('takes turns between askers, each in the order they came', () => {
    const q = new FairQueue<string>()
    for (const item of ['a1', 'a2', 'a3', 'a4']) q.put(1, item, { urgent: false })
    q.put(2, 'b1', { urgent: false })
    q.put(3, 'c1', { urgent: false })
    q.put(3, 'c2', { urgent: false })
    expect(drain(q)).toEqual(['a1', 'b1', 'c1', 'a2', 'c2', 'a3', 'a4'])
    expect(q.take()).toBeUndefined()
  })
  it('lets urgent things of all go first, in turns too', () => {
    const q = new FairQueue<string>()
    q.put(1, 'slow', { urgent: false })
    for (const item of ['x1', 'x2']) q.put(1, item, { urgent: true })
    q.put(2, 'y1', { urgent: true })
    expect(drain(q)).toEqual(['x1', 'y1', 'x2', 'slow'])
  })
  it('counts and drops', () => {
    const q = new FairQueue<string>()
    for (const item of ['a1', 'a2', 'a3']) q.put(1, item, { urgent: item === 'a2' })
    expect([q.size, q.waitingOf(1), q.waitingOf(2)]).toEqual([3, 3, 0])
    expect(q.drop((item) => item !== 'a3').sort()).toEqual(['a1', 'a2'])
    expect([q.size, drain(q)]).toEqual([1, ['a3']])
  })
})
