// @vitest-environment jsdom
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import type { ChangeView } from '../../shared/contract/changes.ts'
import { applyEdits, conflictsWith, type Edit } from '../../shared/parameters/edits.ts'
import { editText, readText, withNumericAddresses } from '../../shared/parameters/set-text.ts'
import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import { DraftKeeper, type Sender } from '../../src/features/changes/draft-keeper.ts'
import { draftStorage } from '../../src/features/changes/draft-storage.ts'
import { ApiProblem } from '../../src/lib/api-client.ts'
import { aChange } from './a-change.ts'

const gain = '/families/knee/values/velocityGain'
const limit = '/families/knee/values/currentLimit'
const network = () => new ApiProblem({ code: 'network', status: 0, title: 'No answer', detail: 'Detent did not answer.' })

/** A server that keeps the rules of the contract: compares `from`, counts revisions, refuses another revision's text. */
function aServer(view: ChangeView = aChange()) {
  const server = {
    view,
    cut: false,
    requests: [] as string[],
    save(text: string) {
      const read = readText(text)
      if (!read.ok) throw new ApiProblem({ code: 'content-invalid', status: 422, title: 'x', detail: 'x', extra: { problems: read.problems } })
      server.view = { ...server.view, revision: server.view.revision + 1, text, set: withNumericAddresses(read.document) as MachineSet }
      return server.view
    },
    others(edits: Edit[]) {
      server.save(editText(server.view.text, edits))
    },
  }
  const sender: Sender = {
    async values(edits) {
      server.requests.push(`values ${edits.map((e) => `${e.pointer}=${JSON.stringify(e.to)}`).join(' ')}`)
      if (server.cut) throw network()
      const conflicts = conflictsWith(server.view.set, edits)
      if (conflicts.length > 0) throw new ApiProblem({ code: 'value-conflict', status: 409, title: 'x', detail: 'x', extra: { conflicts: conflicts.map((c) => ({ pointer: c.edit.pointer, yours: c.edit.to ?? null, now: c.now ?? null })) } })
      return server.save(editText(server.view.text, edits))
    },
    async text(text, ifMatch) {
      server.requests.push(`text ${ifMatch}`)
      if (server.cut) throw network()
      if (ifMatch !== server.view.revision) throw new ApiProblem({ code: 'precondition-failed', status: 412, title: 'x', detail: 'x' })
      return server.save(text)
    },
    async fresh() {
      return server.view
    },
  }
  const keeper = () => new DraftKeeper({ view: server.view, sender, storage: draftStorage(7, 'dunlin-47'), onView: () => {} })
  return { server, keeper }
}

beforeEach(() => {
  vi.useFakeTimers()
  localStorage.clear()
})
afterEach(() => vi.useRealTimers())

const pass = (ms: number) => vi.advanceTimersByTimeAsync(ms)

describe('the draft keeper', () => {
  it('shows an edit at once and sends a run of them as one request', async () => {
    const { server, keeper } = aServer()
    const k = keeper()
    k.start()
    k.edit([{ pointer: gain, from: 3.2, to: 4 }])
    k.edit([{ pointer: gain, from: 4, to: 5.6 }])
    expect(k.getState().set.families.knee.values.velocityGain).toBe(5.6)
    expect(k.getState().saving).toBe('waiting')
    expect(k.getState().text).toContain('"velocityGain": 5.6')
    await pass(400)
    expect(server.requests).toEqual([`values ${gain}=5.6`])
    expect(server.view.set.families.knee.values.velocityGain).toBe(5.6)
    expect(k.getState().saving).toBe('saved')
    expect(localStorage.length).toBe(0)
  })

  it('sends an edit inside a place set before as a request of its own, in order', async () => {
    const { server, keeper } = aServer()
    const k = keeper()
    const joint = { name: 'L2 knee', family: 'knee', bus: 'fore', address: 0x34, firmware: 'hinge 2.1.0', values: {} }
    k.edit([{ pointer: '/joints/l2-knee', to: joint }])
    k.edit([{ pointer: '/joints/l2-knee/address', from: 0x34, to: 0x35 }])
    await pass(400)
    expect(server.requests).toHaveLength(2)
    expect(server.view.set.joints['l2-knee'].address).toBe(0x35)
  })

  it('goes back and forth over its own edits', async () => {
    const { server, keeper } = aServer()
    const k = keeper()
    k.edit([{ pointer: gain, from: 3.2, to: 5.6 }])
    await pass(2000)
    k.edit([{ pointer: '/joints/r3-knee/values/velocityGain', from: 2.9 }])
    await pass(2000)
    expect(server.view.set.joints['r3-knee'].values).toEqual({})
    k.undo()
    await pass(400)
    expect(server.view.set.joints['r3-knee'].values).toEqual({ velocityGain: 2.9 })
    k.undo()
    expect(k.getState().set.families.knee.values.velocityGain).toBe(3.2)
    expect(k.getState().canUndo).toBe(false)
    k.redo()
    await pass(400)
    expect(server.view.set.families.knee.values.velocityGain).toBe(5.6)
  })

  it('keeps edits over a dropped connection and a new page, and sends them when the server is back', async () => {
    const { server, keeper } = aServer()
    server.cut = true
    const k = keeper()
    const stop = k.start()
    k.edit([{ pointer: gain, from: 3.2, to: 5.6 }])
    await pass(400)
    expect(k.getState().saving).toBe('lost')
    k.edit([{ pointer: gain, from: 5.6, to: 5.7 }])
    stop()
    server.cut = false
    const next = keeper()
    next.start()
    expect(next.getState().set.families.knee.values.velocityGain).toBe(5.7)
    await pass(100)
    expect(server.requests).toEqual([`values ${gain}=5.6`, `values ${gain}=5.6`, `values ${gain}=5.7`])
    expect(server.view.set.families.knee.values.velocityGain).toBe(5.7)
    expect(next.getState().saving).toBe('saved')
  })

  it('tries again by itself after a lost answer', async () => {
    const { server, keeper } = aServer()
    server.cut = true
    const k = keeper()
    k.start()
    k.edit([{ pointer: gain, from: 3.2, to: 5.6 }])
    await pass(400)
    server.cut = false
    await pass(1100)
    expect(k.getState().saving).toBe('saved')
    expect(server.view.set.families.knee.values.velocityGain).toBe(5.6)
  })

  it.each([['theirs', 5.2], ['mine', 5.6]] as const)('asks when another value was saved meanwhile; keep %s', async (keep, stands) => {
    const { server, keeper } = aServer()
    const k = keeper()
    server.others([{ pointer: gain, from: 3.2, to: 5.2 }])
    k.edit([{ pointer: gain, from: 3.2, to: 5.6 }, { pointer: limit, from: 2.8, to: 3.2 }])
    await pass(400)
    expect(k.getState().saving).toBe('halted')
    expect(k.getState().conflicts).toEqual([{ pointer: gain, yours: 5.6, now: 5.2 }])
    expect(server.view.set.families.knee.values.currentLimit).toBe(2.8)
    k.decide(k.getState().conflicts[0], keep)
    await pass(100)
    expect(server.view.set.families.knee.values.velocityGain).toBe(stands)
    expect(server.view.set.families.knee.values.currentLimit).toBe(3.2)
    expect(k.getState().set.families.knee.values.velocityGain).toBe(stands)
    expect(k.getState().saving).toBe('saved')
  })

  it('holds a refused edit for its writer, and lets it be taken back', async () => {
    const { keeper, server } = aServer()
    const k = keeper()
    k.edit([{ pointer: gain, from: 3.2, to: 5.6 }])
    const refusal = new ApiProblem({ code: 'not-permitted', status: 403, title: 'Not permitted', detail: 'Only its author writes in it.' })
    vi.spyOn(server, 'save').mockImplementationOnce(() => {
      throw refusal
    })
    await pass(400)
    expect(k.getState().refusal).toBe(refusal)
    expect(k.getState().set.families.knee.values.velocityGain).toBe(5.6)
    k.dropRefused()
    expect(k.getState().set.families.knee.values.velocityGain).toBe(3.2)
    expect(k.getState().saving).toBe('saved')
    expect(k.getState().canUndo).toBe(false)
  })
})

describe('the typed text', () => {
  const typed = (text: string, from: string, to: string) => {
    expect(text).toContain(from)
    return text.replace(from, to)
  }

  it('is saved after a pause, comments and all, and can be taken back', async () => {
    const { server, keeper } = aServer()
    const k = keeper()
    k.type(typed(server.view.text, '"velocityGain": 3.2', '// softer ground\n        "velocityGain": 5.6'))
    await pass(700)
    expect(server.requests).toEqual([])
    await pass(300)
    expect(server.view.text).toContain('// softer ground')
    expect(k.getState().saving).toBe('saved')
    k.undo()
    await pass(400)
    expect(server.view.set.families.knee.values.velocityGain).toBe(3.2)
    expect(server.view.text).toContain('// softer ground')
  })

  it('is kept, with its problems named, while it cannot be read', async () => {
    const { server, keeper } = aServer()
    const k = keeper()
    const stop = k.start()
    k.type(`${server.view.text} }`)
    await pass(1000)
    expect(server.requests).toEqual([])
    expect(k.getState().saving).toBe('unread')
    expect(k.getState().textProblems[0].line).toBeGreaterThan(1)
    stop()
    expect(keeper().getState().text).toBe(`${server.view.text} }`)
    k.dropText()
    expect(k.getState().saving).toBe('saved')
    expect(k.getState().text).toBe(server.view.text)
  })

  it('takes in what others saved elsewhere meanwhile', async () => {
    const { server, keeper } = aServer()
    const k = keeper()
    k.type(typed(server.view.text, '"velocityGain": 3.2', '"velocityGain": 5.6 /* mine */'))
    server.others([{ pointer: limit, from: 2.8, to: 3.2 }])
    await pass(1000)
    expect(server.requests).toEqual(['text 3', 'text 4'])
    expect(server.view.set.families.knee.values).toMatchObject({ velocityGain: 5.6, currentLimit: 3.2 })
    expect(server.view.text).toContain('/* mine */')
  })

  it.each([['theirs', 5.2], ['mine', 5.6]] as const)('asks where others altered the same value; keep %s', async (keep, stands) => {
    const { server, keeper } = aServer()
    const k = keeper()
    k.type(typed(server.view.text, '"velocityGain": 3.2', '"velocityGain": 5.6'))
    server.others([{ pointer: gain, from: 3.2, to: 5.2 }, { pointer: limit, from: 2.8, to: 3.2 }])
    await pass(1000)
    expect(k.getState().conflicts).toEqual([{ pointer: gain, yours: 5.6, now: 5.2 }])
    k.decide(k.getState().conflicts[0], keep)
    await pass(100)
    expect(server.view.set.families.knee.values).toMatchObject({ velocityGain: stands, currentLimit: 3.2 })
    expect(k.getState().saving).toBe('saved')
  })

  it('stays in step with values edited beside it', async () => {
    const { server, keeper } = aServer()
    const k = keeper()
    k.type(typed(server.view.text, '"velocityGain": 3.2', '"velocityGain": 5.6'))
    k.edit([{ pointer: limit, from: 2.8, to: 3.2 }])
    await k.flush()
    expect(server.view.set.families.knee.values).toMatchObject({ velocityGain: 5.6, currentLimit: 3.2 })
    expect(applyEdits(server.view.set, [])).toEqual(k.getState().set)
  })
})
