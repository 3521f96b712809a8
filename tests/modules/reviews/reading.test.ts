import { beforeAll, describe, expect, it } from 'vitest'
import { rowsOf } from '../../../server/modules/reviews/diff-change.ts'
import type { DiffView, ReadingView } from '../../../shared/contract/reviews.ts'
import { aDraft, aWalker, etag, read, readAll, submitted, through, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import { password } from '../../support/workplace.ts'

const gain = '/families/knee/values/velocityGain'
const speed = '/families/knee/values/speedLimit'

describe('rows of a change, read before they are signed', () => {
  let w: Walker
  let key: string
  const diff = async () => (await w.reviewer.get(`/api/changes/${key}/diff`).expect(200)).body as DiffView
  const reading = async (person = w.reviewer) => (await person.get(`/api/changes/${key}/reading`).expect(200)).body as ReadingView
  const sign = async (status: number) => {
    const view = await read(w.reviewer, key)
    return w.reviewer.post(`/api/changes/${key}/sign`, { password, contentHash: view.contentHash }).set('If-Match', etag(view)).expect(status)
  }
  const mark = (rows: object[], person = w.reviewer) => person.post(`/api/changes/${key}/reading`, { rows })

  beforeAll(async () => {
    w = await aWalker()
    await through(w, await aDraft(w), '1.0.0')
    key = ((await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Softer, slower', reason: 'Tried on the stand.' }).expect(201)).body as { key: string }).key
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.2, to: 3 }, { pointer: speed, from: 6, to: 5 }] }).expect(200)
  })

  it('folds joints that alter alike into one row for each value, each with a key of its own', async () => {
    const { groups, counts } = await diff()
    expect(groups.map((g) => [g.joints, g.rows.map((r) => r.parameter)])).toEqual([[['l1-knee', 'r1-knee'], ['speedLimit', 'velocityGain']]])
    expect(groups[0].rows[1]).toMatchObject({ key: 'value:l1-knee:velocityGain', pointer: gain, before: { value: '3.2' }, after: { value: '3' } })
    expect(counts).toEqual({ values: 4, joints: 2, rows: 2 })
  })

  it('are marked once there is something to sign, by who may sign', async () => {
    const rows = rowsOf(await diff()).map((r) => ({ key: r.key, hash: r.hash }))
    expect((await mark(rows).expect(409)).body.detail).toContain('The change is draft')
    await submitted(w, key)
    expect((await reading()).may.mark).toEqual({ allowed: true })
    expect((await reading(w.observer)).may.mark.allowed).toBe(false)
    await mark(rows, w.engineer).expect(403)
    await mark(rows, w.observer).expect(403)
  })

  it('keep a change from being signed, with the count and the names of what is unread', async () => {
    const [second, first] = rowsOf(await diff())
    expect((await mark([{ key: first.key, hash: first.hash }]).expect(200)).body).toMatchObject({ read: [first.key], rows: 2, people: [{ name: w.reviewer.me.name, read: 1 }] })
    const refusal = await sign(409)
    expect(refusal.body).toMatchObject({ type: '/problems/wrong-state', unread: 1, rows: 2, errors: [{ pointer: second.pointer, detail: 'Speed limit is not marked as read' }] })
    expect(refusal.body.detail).toContain('1 of 2 rows')
    expect((await read(w.reviewer, key)).signatures).toEqual([])
  })

  it('are marked twice without harm, and unmarked again', async () => {
    const [, first] = rowsOf(await diff())
    await mark([{ key: first.key, hash: first.hash }, { key: first.key, hash: first.hash }]).expect(200)
    expect((await w.reviewer.delete(`/api/changes/${key}/reading/${encodeURIComponent(first.key)}`).expect(200)).body.read).toEqual([])
    await w.reviewer.delete(`/api/changes/${key}/reading/nothing`).expect(200)
  })

  it('are not marked as something that they do not say', async () => {
    const [first] = rowsOf(await diff())
    const refusal = await mark([{ key: first.key, hash: 'f'.repeat(64) }, { key: 'value:l1-knee:none', hash: first.hash }]).expect(409)
    expect(refusal.body).toMatchObject({ type: '/problems/content-differs', errors: [{ pointer: speed }, { pointer: '' }] })
    expect((await reading()).read).toEqual([])
  })

  it("are each person's own: what one has read, another has not", async () => {
    await readAll(w.manager, key)
    expect((await reading()).read).toEqual([])
    expect((await reading()).people).toEqual([{ name: w.manager.me.name, read: 2 }])
  })

  it('stay read through a return while they say the same, and become unread when they say something else', async () => {
    await readAll(w.reviewer, key)
    await w.manager.post(`/api/changes/${key}/return`, { reason: 'A little more gain.' }).set('If-Match', etag(await read(w.manager, key))).expect(200)
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3, to: 3.1 }] }).expect(200)
    await submitted(w, key)
    expect(await reading()).toMatchObject({ read: ['value:l1-knee:speedLimit'], rows: 2 })
    expect((await sign(409)).body).toMatchObject({ unread: 1 })
    await readAll(w.reviewer, key)
    expect((await sign(200)).body.state).toBe('approved')
    expect((await lastEntries(w, 2))[1]).toMatchObject({ act: 'change peer review', details: { rowsRead: 2 } })
  })

  it('keep the release from being signed too', async () => {
    const view = await read(w.manager, key)
    const release = () => w.manager.post(`/api/changes/${key}/release`, { password, contentHash: view.contentHash, version: '1.1.0' }).set('If-Match', etag(view))
    expect((await release().expect(409)).body).toMatchObject({ unread: 1, rows: 2 })
    await readAll(w.manager, key)
    await release().expect(201)
  })
})
