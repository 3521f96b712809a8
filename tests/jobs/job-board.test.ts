import { describe, expect, it } from 'vitest'
import { JobEnded } from '../../server/jobs/job.ts'
import { QueueFull } from '../../server/jobs/job-board.ts'
import { TimeLimit, WorkerLost } from '../../server/jobs/threads.ts'
import { aBoard, aModel, aNominal, aStore, aSweep, settled, until, watched } from './a-board.ts'

describe('results by hash', () => {
  it('computes equal requests once, and answers them from the store for ever after', async () => {
    const store = aStore()
    const threads = watched()
    const board = aBoard({ store, threads })
    const [a, b] = await Promise.all([settled(board, [aNominal(), aNominal()]), settled(board, [aNominal()], 2)])
    expect(threads.done).toEqual(['nominal 3.2'])
    expect(a.get(aNominal().hash)).toEqual(b.get(aNominal().hash))
    const later = watched()
    const again = await settled(aBoard({ store, threads: later }), [aNominal()])
    expect(later.done).toEqual([])
    expect(again.get(aNominal().hash)).toEqual(a.get(aNominal().hash))
  })

  it('keeps apart what differs in one number', () => {
    expect(aNominal().hash).not.toBe(aNominal({ K_pv: 3.2001 }).hash)
    expect(aNominal().hash).toBe(aNominal({}).hash)
    expect(aNominal().hash).toMatch(/^[0-9a-f]{64}$/)
  })

  it('keeps a refusal as a result: what can never be computed is not tried again', async () => {
    const store = aStore()
    const bad = aNominal({ f_o: 1999.7 })
    const outcome = (await settled(aBoard({ store }), [bad])).get(bad.hash)
    expect(outcome).toMatchObject({ kind: 'refused', code: 'rates-refused' })
    expect(store.rows.has(bad.hash)).toBe(true)
  })

  it('does quick ones in the calling thread, and stores them all the same', async () => {
    const store = aStore()
    const threads = watched()
    const board = aBoard({ store, threads })
    await board.settle([aNominal()], { asker: 1, here: () => true })
    await board.close()
    expect(threads.done).toEqual([])
    expect(store.rows.has(aNominal().hash)).toBe(true)
  })
})

describe('a topic that is followed', () => {
  it('tells how far it is, and is done in the end', async () => {
    const board = aBoard()
    const seen: number[] = []
    board.listen('check', () => seen.push(board.progressOf('check').done))
    await board.follow('check', [aSweep()], 1)
    expect(board.progressOf('check')).toEqual({ done: 0, total: 260, state: 'running', problem: '' })
    await until(() => board.progressOf('check').state === 'done')
    expect(board.progressOf('check')).toEqual({ done: 260, total: 260, state: 'done', problem: '' })
    expect(seen.length).toBeGreaterThan(2)
    expect(seen.toSorted((a, b) => a - b)).toEqual(seen)
    expect((await board.known([aSweep()])).size).toBe(1)
  })

  it('stops, stays stopped when looked at again, and goes on when asked to', async () => {
    const threads = watched()
    const board = aBoard({ threads })
    await board.follow('check', [aSweep()], 1)
    await until(() => board.progressOf('check').done > 0)
    board.stop('check')
    expect(board.progressOf('check').state).toBe('stopped')
    const done = threads.done.length
    await board.follow('check', [aSweep()], 1)
    for (let k = 0; k < 50; k += 1) await new Promise((next) => setImmediate(next))
    // one piece may have been under way when it was stopped
    expect(threads.done.length).toBeLessThanOrEqual(done + 1)
    board.resume('check')
    await until(() => board.progressOf('check').state === 'done')
  })

  it('lets go of what it wanted before, unless another topic wants it too', async () => {
    const board = aBoard()
    await board.follow('check', [aSweep()], 1)
    await board.follow('other', [aSweep()], 2)
    await board.follow('check', [aSweep({ K_pv: 3 })], 1)
    await until(() => board.progressOf('other').state === 'done' && board.progressOf('check').state === 'done')
    const alone = aBoard({ threads: watched() })
    await alone.follow('check', [aSweep()], 1)
    await alone.follow('check', [aNominal()], 1)
    await until(() => alone.progressOf('check').state === 'done')
    expect((await alone.known([aSweep()])).size).toBe(0)
  })

  it('a waiter gets its result though somebody who only looked stops', async () => {
    const board = aBoard()
    await board.follow('check', [aSweep()], 1)
    const waiting = settled(board, [aSweep()], 2)
    await until(() => board.progressOf('check').done > 0)
    board.stop('check')
    expect((await waiting).get(aSweep().hash)?.kind).toBe('result')
  })
})

describe('a thread that ends under its task', () => {
  it('does not take the request with it: the task is done once more', async () => {
    const threads = watched(1, (_kind, count) => (count === 1 ? new WorkerLost('the thread exited') : null))
    expect((await settled(aBoard({ threads }), [aNominal()])).get(aNominal().hash)?.kind).toBe('result')
  })

  it('twice is a clear problem, in the answer and in the progress', async () => {
    const board = aBoard({ threads: watched(1, () => new WorkerLost('the thread exited')) })
    const error: unknown = await settled(board, [aNominal()]).catch((e: unknown) => e)
    expect(error).toBeInstanceOf(JobEnded)
    expect((error as JobEnded).state).toBe('failed')
    expect((error as JobEnded).message).toContain('ended twice (the thread exited)')
    await board.follow('check', [aSweep()], 1)
    await until(() => board.progressOf('check').state === 'failed')
    expect(board.progressOf('check').problem).toContain('start it again')
  })

  it('a task beyond its time limit is not tried twice', async () => {
    const threads = watched(1, () => new TimeLimit('a piece took longer than 60 s'))
    const error = (await settled(aBoard({ threads }), [aNominal()]).catch((e: unknown) => e)) as JobEnded
    expect(error.message).toContain('longer than 60 s')
    expect(threads.done).toEqual([])
  })

  it('an analysis beyond its own time is ended', async () => {
    let now = 0
    const board = aBoard({ clock: () => (now += 1000), limits: { jobMs: 3000 } })
    const error = (await settled(board, [aSweep()]).catch((e: unknown) => e)) as JobEnded
    expect(error).toMatchObject({ state: 'failed' })
    expect(error.message).toContain('longer than 3 s')
  })
})

describe('the queue', () => {
  it('is fair: whoever asks for one thing does not wait for another person’s many', async () => {
    const threads = watched()
    const board = aBoard({ threads })
    const many = Array.from({ length: 8 }, (_, k) => aSweep({ K_pv: 2 + k / 10 }))
    const first = settled(board, many, 1)
    const second = settled(board, [aSweep({ K_pv: 1.5 })], 2)
    await second
    const begun = new Set(threads.done.filter((d) => d.startsWith('lay out')))
    expect(begun.size).toBeLessThan(many.length)
    await first
  })

  it('lets what somebody waits for go before what only goes on', async () => {
    const threads = watched()
    const board = aBoard({ threads })
    await board.follow('check', [aSweep(), aSweep({ K_pv: 3 }), aSweep({ K_pv: 2.9 })], 1)
    await board.settle([aNominal({ K_pv: 1.5 })], { asker: 1, urgent: true })
    expect(threads.done.indexOf('nominal 1.5')).toBeLessThan(4)
  })

  it('is bounded, for all and for one, and says so', async () => {
    const limits = { waiting: 4, waitingOfOne: 2 }
    const three = [aNominal({ K_pv: 1 }), aNominal({ K_pv: 1.1 }), aNominal({ K_pv: 1.2 })]
    await expect(settled(aBoard({ limits }), three)).rejects.toThrow(QueueFull)
    const board = aBoard({ limits })
    await expect(board.follow('check', three, 1)).rejects.toThrow(QueueFull)
    expect(board.progressOf('check')).toEqual({ done: 0, total: 0, state: 'done', problem: '' })
  })
})

describe('closing', () => {
  it('ends what is under way, and a result that can’t be stored troubles nobody who waits', async () => {
    const warned: string[] = []
    const store = { ...aStore(), save: async () => { throw new Error('the disk is full') } }
    const board = aBoard({ store, warn: (e) => warned.push(e.message) })
    expect((await settled(board, [aNominal()])).size).toBe(1)
    expect(warned).toEqual(['the disk is full'])
    const open = settled(board, [aSweep()])
    const closed = board.close()
    await expect(open).rejects.toThrow('closing')
    await closed
  })
})

describe('a model that refuses', () => {
  it('is told apart from a thread that failed', async () => {
    const threads = watched()
    const bad = aNominal({ W: 1000 })
    expect((await settled(aBoard({ threads }), [bad])).get(bad.hash)).toMatchObject({ kind: 'refused', field: 'firmware.W' })
    expect(threads.done).toHaveLength(1)
    expect(aModel().firmware.W).toBe(14)
  })
})
