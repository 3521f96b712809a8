import { cpSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest'
import { aBench, type Bench } from './a-bench.ts'
import { Child } from './a-child.ts'
import { must, password } from './a-client.ts'
import { added } from './kill-points.ts'
import { fileSizeLimit, smallFileSystem } from './no-room.ts'
import type { Checked, Summary } from './protocol.ts'

let bench: Bench
const children: Child[] = []
let copies = 0

beforeAll(async () => {
  bench = await aBench('faults')
}, 120_000)
afterEach(async () => {
  for (const child of children.splice(0)) await child.end()
})
afterAll(() => bench?.clear())

/** A child that serves a copy of the prepared folder. */
async function serving(folder = join(bench.work, `copy-${(copies += 1)}`)): Promise<{ child: Child; port: number; folder: string; before: Summary }> {
  if (!folder.startsWith(join(bench.work, 'small')) && !folder.startsWith(join(bench.work, 'limited'))) cpSync(bench.prepared.folder, folder, { recursive: true })
  const child = new Child(bench.file('child'))
  children.push(child)
  const port = await child.open(folder)
  return { child, port, folder, before: (await child.check()).summary }
}

const plus = (a: Summary, b: Summary): Summary => Object.fromEntries(Object.entries(a).map(([k, v]) => [k, v + b[k as keyof Summary]])) as unknown as Summary

describe('without room on the disk', () => {
  async function fill(means: 'small' | 'limit') {
    const room = means === 'small' ? smallFileSystem(bench.prepared.folder, bench.work) : fileSizeLimit(bench.prepared.folder, bench.work)
    // where no file system may be mounted, the other means is tried again on the same folder: nothing is skipped
    return room ?? fileSizeLimit(bench.prepared.folder, bench.work)
  }

  it.each(['small', 'limit'] as const)('acts are refused in words, reading goes on, and all of it works again without a restart (%s)', async (means) => {
    const room = await fill(means)
    try {
      const { child, port, before } = await serving(room.folder)
      const { people, approved, act, status } = bench.prepared
      room.take(child)
      for (const kind of ['signing', 'upload', 'release'] as const) {
        const { status: got, body } = await act(kind, port)
        expect([got, body.type]).toEqual(room.name === 'a full file system' || kind === 'upload' ? [507, '/problems/storage-full'] : [500, '/problems/storage-failed'])
        expect(body.detail).toMatch(/Nothing of this request was saved/)
      }
      expect(must(await people.author.get(port, `/changes/${approved.key}`), 200)).toMatchObject({ state: 'approved' })
      expect(await child.check()).toEqual({ faults: [], summary: before } satisfies Checked)
      room.give(child)
      let summary = before
      for (const kind of ['signing', 'upload', 'release'] as const) {
        must(await act(kind, port), status[kind])
        summary = plus(summary, added[kind])
      }
      expect(await child.check()).toEqual({ faults: [], summary } satisfies Checked)
      await child.close()
      const again = await serving(room.folder)
      expect(again.before).toEqual(summary)
    } finally {
      for (const child of children.splice(0)) await child.end()
      room.clear()
    }
  }, 120_000)
})

describe('many at once', () => {
  it('release one change: one wins, the others are told, and no sequence number is given twice', async () => {
    const { child, port, before } = await serving()
    const { manager, deputy } = bench.prepared.people
    const { key, contentHash, revision } = bench.prepared.approved
    const answers = await Promise.all(
      Array.from({ length: 12 }, (_, i) => (i % 2 === 0 ? manager : deputy).act(port, 'POST', `/changes/${key}/release`, { password, contentHash, version: `1.0.${i}` }, { ifMatch: revision })),
    )
    const won = answers.filter((a) => a.status === 201)
    expect(won).toHaveLength(1)
    for (const { status, body } of answers.filter((a) => a.status !== 201)) {
      expect([409, 412]).toContain(status)
      expect(body.detail).toMatch(/Nothing/)
    }
    expect(await child.check()).toEqual({ faults: [], summary: plus(before, added.release) })
  }, 120_000)

  it('send the same request: it is done once, and each is answered the same', async () => {
    const { child, port, before } = await serving()
    const answers = await Promise.all(Array.from({ length: 6 }, () => bench.prepared.act('release', port)))
    expect(answers.map((a) => a.status)).toEqual(Array(6).fill(201))
    expect(new Set(answers.map((a) => JSON.stringify(a.body))).size).toBe(1)
    expect(await child.check()).toEqual({ faults: [], summary: plus(before, added.release) })
  }, 120_000)
})

describe('a lost answer', () => {
  it('and the same request again, also after a restart: one release, the first answer', async () => {
    const { child, port, folder, before } = await serving()
    const first = must(await bench.prepared.act('release', port), 201)
    child.kill()
    await child.gone
    const next = new Child(bench.file('child'))
    children.push(next)
    const at = await next.open(folder)
    expect(must(await bench.prepared.act('release', at), 201)).toEqual(first)
    expect(await next.check()).toEqual({ faults: [], summary: plus(before, added.release) })
    const { manager } = bench.prepared.people
    const { key, contentHash, revision } = bench.prepared.approved
    expect((await manager.act(at, 'POST', `/changes/${key}/release`, { password, contentHash, version: '1.0.1' }, { ifMatch: revision, key: 'released-once-only' })).body.type).toBe('/problems/key-reused')
  }, 120_000)
})

describe('a check', () => {
  it('that was cut off by a kill is taken up by the next process, to the same result', async () => {
    const { child, port, folder } = await serving()
    const { author } = bench.prepared.people
    const { key, revision } = must(await author.act(port, 'POST', '/changes', { machine: 'dunlin', title: 'Softer knees', reason: 'Less noise at rest.' }), 201) as { key: string; revision: number }
    const text = (must(await author.get(port, `/changes/${bench.prepared.approved.key}`), 200) as { text: string }).text.replace('"velocityGain": 3.2', '"velocityGain": 2.9')
    must(await author.act(port, 'PUT', `/changes/${key}/text`, { text }, { ifMatch: revision ?? 1 }), 200)
    interface Looked {
      complete: boolean
      inputsHash: string
      findings: unknown
    }
    const look = async (at: number) => must(await author.get(at, `/changes/${key}/check`), 200) as unknown as Looked
    expect((await look(port)).complete).toBe(false)
    child.kill()
    await child.gone
    const next = new Child(bench.file('child'))
    children.push(next)
    const at = await next.open(folder)
    let looked = await look(at)
    for (let tries = 0; !looked.complete && tries < 200; tries += 1) {
      await new Promise((done) => setTimeout(done, 300))
      looked = await look(at)
    }
    expect(looked.complete).toBe(true)
    const undisturbed = await serving()
    const twin = must(await author.act(undisturbed.port, 'POST', '/changes', { machine: 'dunlin', title: 'Softer knees', reason: 'Less noise at rest.' }), 201) as { key: string; revision: number }
    must(await author.act(undisturbed.port, 'PUT', `/changes/${twin.key}/text`, { text }, { ifMatch: twin.revision ?? 1 }), 200)
    let other = must(await author.get(undisturbed.port, `/changes/${twin.key}/check`), 200) as unknown as Looked
    for (let tries = 0; !other.complete && tries < 200; tries += 1) {
      await new Promise((done) => setTimeout(done, 300))
      other = must(await author.get(undisturbed.port, `/changes/${twin.key}/check`), 200) as unknown as Looked
    }
    expect(looked.findings).toEqual(other.findings)
    expect(looked.inputsHash).toBe(other.inputsHash)
  }, 180_000)
})
