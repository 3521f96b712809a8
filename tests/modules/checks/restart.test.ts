import { mkdtempSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { openDatabase, type Orm } from '../../../server/db/orm.ts'
import { inPlace } from '../../../server/jobs/in-place.ts'
import { JobBoard } from '../../../server/jobs/job-board.ts'
import type { Threads } from '../../../server/jobs/threads.ts'
import { analysisStore } from '../../../server/modules/checks/analysis-store.ts'
import { aNominal, aSweep, until } from '../../jobs/a-board.ts'

const file = join(mkdtempSync(join(tmpdir(), 'detent-restart-')), 'detent.sqlite')
const boardOn = (orm: Orm, threads: Threads = inPlace()) => new JobBoard({ threads, store: analysisStore(orm, () => new Date('2026-03-02T09:00:00Z')) })

/** Threads that count what they did. */
function counting(): Threads & { done: number } {
  const real = inPlace()
  const threads: Threads & { done: number } = {
    ...real,
    done: 0,
    run: (task, told) => {
      threads.done += 1
      return real.run(task, told)
    },
  }
  return threads
}

describe('a program that ends in the midst of a sweep', () => {
  it('answers what was stored when it is back, and begins again what was not', async () => {
    const first = await openDatabase(file)
    const before = boardOn(first)
    const known = await before.settle([aNominal()], { asker: 1 })
    await before.follow('check', [aSweep()], 1)
    await until(() => before.progressOf('check').done > 0)
    await before.close()
    await first.close(true)

    const second = await openDatabase(file)
    const threads = counting()
    const after = boardOn(second, threads)
    expect(await after.settle([aNominal()], { asker: 1 })).toEqual(known)
    expect(threads.done).toBe(0)
    await after.follow('check', [aSweep()], 1)
    expect(after.progressOf('check')).toMatchObject({ done: 0, state: 'running' })
    await until(() => after.progressOf('check').state === 'done')
    const swept = await after.known([aSweep()])
    await after.close()
    await second.close(true)

    const third = await openDatabase(file)
    const idle = counting()
    const last = boardOn(third, idle)
    expect(await last.follow('check', [aSweep()], 1)).toEqual(swept)
    expect(last.progressOf('check').state).toBe('done')
    expect(idle.done).toBe(0)
    await last.close()
    await third.close(true)
  })

  it('keeps the first of two equal results', async () => {
    const orm = await openDatabase(':memory:')
    const store = analysisStore(orm, () => new Date('2026-03-02T09:00:00Z'))
    const entry = { hash: 'a'.repeat(64), kind: 'nominal' as const, outcome: { kind: 'refused' as const, code: 'x', field: '', text: 'first' } }
    await store.save([entry])
    await store.save([{ ...entry, outcome: { ...entry.outcome, text: 'second' } }])
    expect(await store.load([entry.hash, 'b'.repeat(64)])).toEqual(new Map([[entry.hash, entry.outcome]]))
    await orm.close(true)
  })
})
