import { once } from 'node:events'
import type { AddressInfo } from 'node:net'
import { beforeAll, describe, expect, it } from 'vitest'
import { inPlace } from '../../../server/jobs/in-place.ts'
import { JobBoard } from '../../../server/jobs/job-board.ts'
import type { Threads } from '../../../server/jobs/threads.ts'
import { analysisStore } from '../../../server/modules/checks/analysis-store.ts'
import type { CheckEvent, CheckView, JointReportView, MapView } from '../../../shared/contract/checks.ts'
import type { RetuneView, StartingValuesView } from '../../../shared/contract/proposals.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aDraft, aWalker, etag, read, submitted, through, twoKnees, type Walker } from '../../support/a-walker.ts'
import { password, type SignedIn } from '../../support/workplace.ts'

const checkOf = async (person: SignedIn, key: string) => (await person.get(`/api/changes/${key}/check`).expect(200)).body as CheckView

/** The check once its tolerances are walked; gives up after many looks. */
async function completed(person: SignedIn, key: string): Promise<CheckView> {
  for (let k = 0; k < 2000; k += 1) {
    const view = await checkOf(person, key)
    if (view.complete) return view
    expect(view.progress.state).toBe('running')
    await new Promise((next) => setTimeout(next, 5))
  }
  throw new Error('the check never came to its end')
}

const edit = (w: Walker, key: string, edits: { pointer: string; from?: unknown; to?: unknown }[]) => w.engineer.patch(`/api/changes/${key}/values`, { edits }).expect(200)
const gain = '/families/knee/values/velocityGain'

/** From here on sweeps wait, until what this answers is called. */
function holding(w: Walker): () => void {
  const gate: { open?: () => void } = {}
  const opened = new Promise<void>((open) => void (gate.open = open))
  const real = inPlace()
  const threads: Threads = { ...real, run: async (task, told, stopped) => { if (task.kind === 'points') await opened; return real.run(task, told, stopped) } }
  w.services.checks = new JobBoard({ threads, store: analysisStore(w.orm, w.services.now) })
  return gate.open!
}

describe('the check of a change', () => {
  let w: Walker
  let key: string
  beforeAll(async () => {
    w = await aWalker()
    key = await aDraft(w)
  })

  it('answers the nominal findings at once, and the whole when it is done', async () => {
    const quick = await checkOf(w.engineer, key)
    expect(quick).toMatchObject({ complete: false, verdict: 'stable', progress: { done: 0, total: 32 + 256, state: 'running', problem: '' } })
    expect(quick.findings.some((f) => f.kind === 'phase margin')).toBe(true)
    expect(quick.findings.some((f) => f.kind.startsWith('worst') || f.kind.includes('tolerances'))).toBe(false)
    expect(quick.joints[0].candidate).toMatchObject({ tolerance: null, step: { response: 'position', stepTo: 0.2 }, heat: { nodes: 2 } })
    const whole = await completed(w.observer, key)
    expect(whole.progress).toEqual({ done: 288, total: 288, state: 'done', problem: '' })
    expect(whole.findings.find((f) => f.key === 'closed loop over the tolerances/knee')).toMatchObject({ level: 'pass', joints: ['l1-knee', 'r1-knee'] })
    expect(whole.joints[0].candidate!.tolerance!.bounds.map((b) => b.name)).toEqual(['V_bus', 'T_winding', 'k_t', 'J_load', 'eta'])
    // every finding of the quick answer is still there, word for word
    expect(whole.findings).toEqual(expect.arrayContaining(quick.findings.filter((f) => !f.kind.startsWith('current against'))))
  })

  it('is the same every time, and hashes to the same content', async () => {
    const [a, b] = [await checkOf(w.engineer, key), await checkOf(w.reviewer, key)]
    expect({ ...a, checkedAt: '' }).toEqual({ ...b, checkedAt: '' })
    expect(JSON.stringify(a.joints[0].candidate)).toBe(JSON.stringify(a.joints[1].candidate))
  })

  it('computes joints built alike once', async () => {
    const rows = (await w.orm.em.getConnection().execute('select kind, count(*) as n from joint_analysis group by kind order by kind')) as unknown
    expect(rows).toEqual([{ kind: 'nominal', n: 1 }, { kind: 'tolerance', n: 1 }])
  })

  it('keeps results as written', async () => {
    await expect(w.orm.em.getConnection().execute("update joint_analysis set kind = 'x'")).rejects.toThrow('written once')
    await expect(w.orm.em.getConnection().execute('delete from joint_analysis')).rejects.toThrow('written once')
  })

  it('follows the draft: another gain, another check; the old one is answered from the store', async () => {
    const before = await completed(w.engineer, key)
    await edit(w, key, [{ pointer: gain, from: 3.2, to: 2.5 }])
    const after = await checkOf(w.engineer, key)
    expect(after.inputsHash).not.toBe(before.inputsHash)
    expect(after.complete).toBe(false)
    await edit(w, key, [{ pointer: gain, from: 2.5, to: 3.2 }])
    const again = await checkOf(w.engineer, key)
    expect(again).toEqual({ ...before, checkedAt: again.checkedAt })
  })

  it('stops, says so, and goes on', async () => {
    await edit(w, key, [{ pointer: gain, from: 3.2, to: 2.7 }])
    const open = holding(w)
    await checkOf(w.engineer, key)
    const stopped = (await w.engineer.post(`/api/changes/${key}/check/stop`).expect(200)).body
    expect(stopped.progress.state).toBe('stopped')
    const looked = await checkOf(w.engineer, key)
    expect(looked).toMatchObject({ complete: false, progress: { state: 'stopped' } })
    open()
    expect((await w.engineer.post(`/api/changes/${key}/check/resume`).expect(200)).body.progress.state).toBe('running')
    await completed(w.engineer, key)
    await edit(w, key, [{ pointer: gain, from: 2.7, to: 3.2 }])
  })

  it('is waited for by a submission, whatever was stopped', async () => {
    const other = await aDraft(w, twoKnees(), 'Second numbers')
    await edit(w, other, [{ pointer: gain, from: 3.2, to: 2.2 }])
    const open = holding(w)
    await checkOf(w.engineer, other)
    await w.engineer.post(`/api/changes/${other}/check/stop`).expect(200)
    open()
    await submitted(w, other)
    const view = await checkOf(w.reviewer, other)
    expect(view).toMatchObject({ complete: true, progress: { state: 'done' } })
    const entry = (await lastEntries(w))[0]
    expect(entry.act).toBe('change submitted')
  })

  it('tells its progress as events, to whoever may read the change', async () => {
    await edit(w, key, [{ pointer: gain, from: 3.2, to: 2.9 }])
    const open = holding(w)
    await checkOf(w.engineer, key)
    const server = w.app.listen(0, '127.0.0.1')
    await once(server, 'listening')
    try {
      const api = `http://127.0.0.1:${(server.address() as AddressInfo).port}/api`
      const signedIn = await fetch(`${api}/session`, { method: 'POST', headers: { 'Content-Type': 'application/json' }, body: JSON.stringify({ email: w.engineer.me.email, password }) })
      const cookie = signedIn.headers.getSetCookie().map((c) => c.split(';')[0]).join('; ')
      const stop = new AbortController()
      const response = await fetch(`${api}/changes/${key}/check/events`, { headers: { cookie }, signal: stop.signal })
      expect(response.headers.get('content-type')).toMatch(/^text\/event-stream/)
      const events: CheckEvent[] = []
      let text = ''
      open()
      for await (const part of response.body!) {
        text += Buffer.from(part as Uint8Array).toString()
        const frames = text.split('\n\n')
        text = frames.pop()!
        for (const frame of frames) if (frame.startsWith('data: ')) events.push(JSON.parse(frame.slice(6)) as CheckEvent)
        if (events.some((e) => e.progress.state === 'done')) break
      }
      stop.abort()
      expect(events[0].kind).toBe('check')
      expect(events.map((e) => e.progress.done)).toEqual(events.map((e) => e.progress.done).toSorted((a, b) => a - b))
      expect(events.at(-1)!.progress).toMatchObject({ state: 'done', done: 288, total: 288 })
    } finally {
      server.closeAllConnections()
      await new Promise((done) => server.close(done))
    }
    await edit(w, key, [{ pointer: gain, from: 2.9, to: 3.2 }])
  })

  it('opens no events to a person without a role on the machine', async () => {
    const stranger = await w.as([])
    await stranger.get(`/api/changes/${key}/check/events`).expect(404)
    await stranger.post(`/api/changes/${key}/check/stop`).expect(404)
  })
})

describe('the report on one joint', () => {
  let w: Walker
  let key: string
  beforeAll(async () => {
    w = await aWalker()
    const first = await aDraft(w)
    await through(w, first, '1.0.0')
    const { key: next } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Softer', reason: 'Less noise.' }).expect(201)).body as { key: string }
    key = next
    await edit(w, key, [{ pointer: gain, from: 3.2, to: 2.6 }])
    await completed(w.engineer, key)
  })

  it('has both sides, curves, time histories and corners, worst first', async () => {
    const report = (await w.observer.get(`/api/changes/${key}/check/joints/l1-knee`).expect(200)).body as JointReportView
    expect(report).toMatchObject({ joint: 'l1-knee', touched: true, alike: ['l1-knee', 'r1-knee'], complete: true })
    for (const side of [report.candidate!, report.released!]) {
      expect(Object.keys(side.curves)).toEqual(['current', 'velocity', 'position'])
      for (const curve of Object.values(side.curves)) for (const values of Object.values(curve)) expect(values).toHaveLength(300)
      expect(side.step!.t.length).toBeLessThanOrEqual(400)
      expect(side.stepAtWorst!.t.length).toBeGreaterThan(50)
      // as the registers hold the duty, to 2⁻¹⁴
      expect(side.clamps).toEqual({ speed: 6, current: 2.6, voltage: expect.closeTo(22.8, 3) as number })
    }
    expect(report.vertices).toHaveLength(32)
    const share = (row: NonNullable<JointReportView['vertices']>[number]) => Math.min(...Object.values(row.loops).flatMap((l) => [l.phaseMarginDeg! / 45, l.gainMarginDb! / 8]))
    const shares = report.vertices!.map(share)
    expect(shares).toEqual(shares.toSorted((a, b) => a - b))
    const [worst] = report.vertices!
    expect(worst.values).toEqual(report.candidate!.figures.tolerance!.worstVertex.values)
    // a smaller velocity gain has more gain margin at the same corner
    expect(worst.loops.velocity!.gainMarginDb!).toBeGreaterThan(worst.released!.velocity!.gainMarginDb!)
    expect(report.findings.every((f) => f.joints.includes('l1-knee'))).toBe(true)
  })

  it('knows no joint that is not there', async () => {
    const refusal = await w.observer.get(`/api/changes/${key}/check/joints/l9-knee`).expect(404)
    expect(refusal.body.detail).toContain('l1-knee, r1-knee')
  })

  describe('its stability map', () => {
    const ask = { joint: 'l1-knee', x: { parameter: 'K_pv', low: 1, high: 12, count: 6 }, y: { parameter: 'K_pp', low: 10, high: 60, count: 4 } }
    it('is begun, and answered when the same is asked again; a cell says where its values would be typed', async () => {
      const begun = (await w.observer.post(`/api/changes/${key}/check/map`, ask).expect(200)).body as MapView
      expect(begun).toMatchObject({ cells: null, progress: { done: 0, total: 24, state: 'running' }, candidate: { x: expect.closeTo(2.6, 6) as number, y: 36 }, released: { y: 36 } })
      expect(begun.released!.x).toBeCloseTo(3.2, 6)
      let view = begun
      for (let k = 0; k < 2000 && view.cells === null; k += 1) {
        view = (await w.observer.post(`/api/changes/${key}/check/map`, ask).expect(200)).body as MapView
        await new Promise((next) => setTimeout(next, 5))
      }
      expect(view.cells!.verdicts).toHaveLength(24)
      expect(new Set(view.cells!.verdicts)).toEqual(new Set(['stable', 'unstable']))
      view.cells!.verdicts.forEach((v, k) => expect(view.cells!.phaseMarginDeg[k] === null).toBe(v !== 'stable'))
      expect(view.x).toMatchObject({ parameter: 'K_pv', unit: 'A·s/rad', pointer: gain, perSi: 1, spacing: 'equal steps' })
      expect(view.progress.state).toBe('done')
    })

    it.each([
      ['too many cells along an axis', { ...ask, x: { ...ask.x, count: 65 } }, 400, '/x/count'],
      ['one cell', { ...ask, x: { ...ask.x, count: 1 } }, 400, '/x/count'],
      ['an unknown parameter', { ...ask, x: { ...ask.x, parameter: 'K_xx' } }, 400, '/x/parameter'],
      ['crossed bounds', { ...ask, y: { ...ask.y, low: 70 } }, 400, '/y'],
      ['one parameter twice', { ...ask, y: { ...ask.y, parameter: 'K_pv' } }, 400, '/y'],
      ['a stiffness that a rigid joint has not', { ...ask, x: { parameter: 'k_s', low: 1, high: 2, count: 3 } }, 400, '/x'],
      ['a joint that is not there', { ...ask, joint: 'nobody' }, 404, undefined],
      ['a bound beyond numbers', { ...ask, x: { ...ask.x, high: 1e400 } }, 400, '/x/high'],
    ])('refuses %s', async (_what, body, status, pointer) => {
      const refusal = await w.observer.post(`/api/changes/${key}/check/map`, body).expect(status)
      if (pointer) expect(refusal.body.errors.map((e: { pointer: string }) => e.pointer)).toContain(pointer)
    })

    it('refuses an axis on which a cell is no joint, once that is found', async () => {
      const bad = { ...ask, y: { parameter: 'f_o', low: 1999.3, high: 2500.7, count: 3 } }
      let status = 200
      let body: { detail?: string; errors?: { pointer: string }[] } = {}
      for (let k = 0; k < 400 && status === 200; k += 1) {
        const answer = await w.observer.post(`/api/changes/${key}/check/map`, bad)
        status = answer.status
        body = answer.body as typeof body
        await new Promise((next) => setTimeout(next, 5))
      }
      expect(status).toBe(400)
      expect(body.detail).toContain('p + q exceeds 512')
    })
  })

  describe('proposals', () => {
    it('of starting values are edits with their own check, and nothing is applied', async () => {
      const text = (await read(w.engineer, key)).text
      const view = (await w.engineer.post(`/api/changes/${key}/check/starting-values`, { joint: 'l1-knee', bandwidthHz: { velocity: 20 } }).expect(200)).body as StartingValuesView
      if (view.kind !== 'proposed') throw new Error(view.why)
      expect(view.proposal.figures.verdict).toBe('stable')
      expect(view.proposal.rules.map((r) => r.gain).toSorted()).toEqual(['K_ic', 'K_ip', 'K_iv', 'K_pc', 'K_pp', 'K_pv'])
      expect(view.proposal.rules.find((r) => r.gain === 'K_pp')!.value).toBeCloseTo((2 * Math.PI * 20) / 5, 1)
      expect(view.proposal.reaches).toEqual(['l1-knee', 'r1-knee'])
      expect(view.proposal.findings.some((f) => f.kind === 'phase margin')).toBe(true)
      expect(view.others).toHaveLength(2)
      const pointers = view.proposal.edits.map((e) => e.pointer)
      expect(pointers).toContain(gain)
      expect((await read(w.engineer, key)).text).toBe(text)
      await w.engineer.patch(`/api/changes/${key}/values`, { edits: view.proposal.edits }).expect(200)
      const check = await checkOf(w.engineer, key)
      expect(check.joints[0].candidate!.rho).toBeCloseTo(view.proposal.figures.rho, 12)
      await w.engineer.put(`/api/changes/${key}/text`, { text }).set('If-Match', etag(await read(w.engineer, key))).expect(200)
    })

    it('of bandwidths out of reach are none, with the reason', async () => {
      const view = (await w.engineer.post(`/api/changes/${key}/check/starting-values`, { joint: 'l1-knee', bandwidthHz: { current: 90_000 } }).expect(200)).body as StartingValuesView
      expect(view).toMatchObject({ kind: 'none' })
      expect((view as { why: string }).why).toContain('nothing was computed')
    })

    it('of a retune come with a swept check', async () => {
      const ask = { joint: 'l1-knee', gains: [{ gain: 'K_pv', from: 0.6, to: 1.6 }], bandwidthHz: { velocity: 20, position: 3 } }
      let view = (await w.engineer.post(`/api/changes/${key}/check/retune`, ask).expect(200)).body as RetuneView
      expect(view).toMatchObject({ proposal: null, why: '', progress: { total: 300, state: 'running' } })
      for (let k = 0; k < 2000 && view.progress.state === 'running'; k += 1) {
        view = (await w.engineer.post(`/api/changes/${key}/check/retune`, ask).expect(200)).body as RetuneView
        await new Promise((next) => setTimeout(next, 20))
      }
      expect(view.progress.state).toBe('done')
      expect(view.proposal!.figures.tolerance!.vertices.points).toBe(32)
      expect(view.proposal!.edits).toMatchObject([{ pointer: gain, from: 2.6 }])
      expect(view.proposal!.rules[0].rule).toMatch(/^worst margin over the corners of .* from [\d.]+ to [\d.]+/)
      expect(view.why).toContain('sets of gains tried')
    })

    it.each([
      ['a gain that is 0', { joint: 'l1-knee', gains: [{ gain: 'K_ip', from: 0.5, to: 2 }] }, '/gains/0/gain'],
      ['a gain twice', { joint: 'l1-knee', gains: [{ gain: 'K_pv', from: 0.5, to: 2 }, { gain: 'K_pv', from: 0.5, to: 2 }] }, '/gains/1/gain'],
      ['a range that leaves out what stands', { joint: 'l1-knee', gains: [{ gain: 'K_pv', from: 2, to: 3 }] }, '/gains/0/from'],
    ])('refuses a retune of %s', async (_what, body, pointer) => {
      const refusal = await w.engineer.post(`/api/changes/${key}/check/retune`, body).expect(400)
      expect(refusal.body.errors.map((e: { pointer: string }) => e.pointer)).toContain(pointer)
    })

    it('are for controls engineers', async () => {
      await w.observer.post(`/api/changes/${key}/check/starting-values`, { joint: 'l1-knee' }).expect(403)
      await w.reviewer.post(`/api/changes/${key}/check/retune`, { joint: 'l1-knee', gains: [{ gain: 'K_pv', from: 0.5, to: 2 }] }).expect(403)
    })
  })
})

describe('numbers that can’t be computed', () => {
  let w: Walker
  beforeAll(async () => {
    w = await aWalker()
  })
  it.each([
    ['rates whose ratio explodes', [{ pointer: '/families/knee/values/outerRate', from: 2000, to: 1999 }], 'p + q exceeds 512'],
    ['an outer task faster than the current task', [{ pointer: '/families/knee/values/outerRate', from: 2000, to: 8000 }, { pointer: '/families/knee/values/currentRate', from: 16000, to: 4000 }], 'runs faster than the current task'],
  ])('%s block, in words, and leave the rest of the check standing', async (_what, edits, words) => {
    const key = await aDraft(w, twoKnees(), 'Odd rates')
    await w.engineer.patch(`/api/changes/${key}/values`, { edits }).expect(200)
    const view = await checkOf(w.engineer, key)
    const blocks = view.findings.filter((f) => f.level === 'block')
    expect(blocks.map((f) => f.kind)).toContain('closed loop')
    expect(blocks.map((f) => f.text).join(' ')).toContain(words)
    expect(view.joints[0].candidate).toBeNull()
    expect(view.findings.find((f) => f.kind === 'bus watchdog')?.level).toBe('pass')
    const refusal = await w.engineer.post(`/api/changes/${key}/submit`).set('If-Match', etag(await read(w.engineer, key))).expect(422)
    expect(refusal.body.type).toBe('/problems/check-blocks')
  })
})
