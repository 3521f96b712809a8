// @vitest-environment jsdom
import '../components/setup-dom.ts'
import { act, screen, waitFor } from '@testing-library/react'
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import type { CheckEvent, CheckView } from '../../shared/contract/checks.ts'
import { aChange } from '../client-changes/a-change.ts'
import { aCheck } from '../client-changes/a-check.ts'
import { anApi, mirela, open } from '../client-changes/a-desk.tsx'

/** A stream that tests speak through. */
class ToldSource {
  static readonly CLOSED = 2
  static readonly all: ToldSource[] = []
  readonly url: string
  readyState = 0
  onopen: (() => void) | null = null
  onmessage: ((message: { data: string }) => void) | null = null
  onerror: (() => void) | null = null
  closed = false

  constructor(url: string) {
    this.url = url
    ToldSource.all.push(this)
  }

  tell(event: CheckEvent) {
    this.onmessage?.({ data: JSON.stringify(event) })
  }

  close() {
    this.closed = true
  }
}

const running = (done: number): CheckView => ({ ...aCheck(), complete: false, progress: { done, total: 260, state: 'running', problem: '' } })
const url = '/api/changes/dunlin-47/check/events'
const streams = () => ToldSource.all.filter((s) => s.url === url)

beforeEach(() => {
  ToldSource.all.length = 0
  vi.stubGlobal('EventSource', ToldSource)
})
afterEach(() => vi.unstubAllGlobals())

/** The report of a change whose check goes on, its stream open. */
async function following() {
  const change = aChange()
  let view = running(20)
  let asked = 0
  anApi(mirela, {
    'GET /changes/dunlin-47': { body: change },
    'GET /changes/dunlin-47/check': () => {
      asked += 1
      return { body: view }
    },
  })
  open('/changes/dunlin-47/check')
  await screen.findByRole('progressbar', { name: 'over the tolerances' })
  await waitFor(() => expect(streams()).toHaveLength(1))
  const [stream] = streams()
  act(() => stream.onopen?.())
  return { stream, asked: () => asked, answers: (next: CheckView) => void (view = next) }
}

const shown = () => Number(screen.getByRole('progressbar', { name: 'over the tolerances' }).getAttribute('aria-valuenow'))

describe('a check that goes on', () => {
  it('shows the progress that its stream tells, and asks again only when a sweep is done', async () => {
    const { stream, asked, answers } = await following()
    act(() => stream.tell({ kind: 'check', progress: { done: 30, total: 260, state: 'running', problem: '' }, finished: 0 }))
    const before = asked()
    act(() => stream.tell({ kind: 'check', progress: { done: 104, total: 260, state: 'running', problem: '' }, finished: 0 }))
    await waitFor(() => expect(shown()).toBe(104))
    expect(asked()).toBe(before)
    answers(running(130))
    act(() => stream.tell({ kind: 'check', progress: { done: 130, total: 260, state: 'running', problem: '' }, finished: 1 }))
    await waitFor(() => expect(asked()).toBe(before + 1))
  })

  it('is read whole when the stream says that it is done, and the stream is closed', async () => {
    const { stream, answers } = await following()
    answers(aCheck())
    act(() => stream.tell({ kind: 'check', progress: { done: 260, total: 260, state: 'done', problem: '' }, finished: 2 }))
    await waitFor(() => expect(screen.queryByRole('progressbar', { name: 'over the tolerances' })).toBeNull())
    await waitFor(() => expect(stream.closed).toBe(true))
  })

  it('is asked for at intervals where the stream drops', async () => {
    const { stream, asked, answers } = await following()
    const before = asked()
    answers(running(200))
    act(() => stream.onerror?.())
    await waitFor(() => expect(shown()).toBe(200))
    answers(running(220))
    await waitFor(() => expect(shown()).toBe(220), { timeout: 4000 })
    expect(asked()).toBeGreaterThanOrEqual(before + 2)
  })
})
