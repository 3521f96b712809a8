import type { Server } from 'node:http'
import type { AddressInfo } from 'node:net'
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest'
import type { ChangeNews } from '../../../shared/contract/presence.ts'
import { aDraft, aWalker, etag, read, type Walker } from '../../support/a-walker.ts'
import { password, type SignedIn } from '../../support/workplace.ts'

const gain = '/families/knee/values/velocityGain'

const cookies = new Map<string, Promise<string>>()
function cookieOf(base: string, { me }: SignedIn): Promise<string> {
  const known = cookies.get(me.email)
  if (known) return known
  const signedIn = fetch(`${base}/api/session`, { method: 'POST', headers: { 'Content-Type': 'application/json' }, body: JSON.stringify({ email: me.email, password }) }).then((r) => r.headers.getSetCookie()[0].split(';')[0])
  cookies.set(me.email, signedIn)
  return signedIn
}

/** An open stream of events: what came so far, and the way to wait for more. */
async function follow(base: string, person: SignedIn, key: string, page: string) {
  const leave = new AbortController()
  const answer = await fetch(`${base}/api/changes/${key}/events?page=${page}`, { headers: { Cookie: await cookieOf(base, person) }, signal: leave.signal })
  const news: ChangeNews[] = []
  let told = () => {}
  const reading = (async () => {
    let text = ''
    for await (const data of answer.body!.pipeThrough(new TextDecoderStream())) {
      const messages = (text + data).split('\n\n')
      text = messages.pop()!
      for (const m of messages) if (m.startsWith('data: ')) news.push(JSON.parse(m.slice(6)) as ChangeNews)
      told()
    }
  })().catch((error: Error) => {
    if (error.name !== 'AbortError') throw error
  })
  return {
    status: answer.status,
    type: answer.headers.get('content-type'),
    news,
    leave: async () => {
      leave.abort()
      await reading
    },
    /** the first message of this kind that fits; what came before it is let go of */
    async next<K extends ChangeNews['kind']>(kind: K, fits: (n: ChangeNews & { kind: K }) => boolean = () => true): Promise<ChangeNews & { kind: K }> {
      for (let i = 0; i < 100; i += 1) {
        const at = news.findIndex((n) => n.kind === kind && fits(n as ChangeNews & { kind: K }))
        if (at >= 0) return news.splice(0, at + 1).at(-1) as ChangeNews & { kind: K }
        await new Promise<void>((done) => {
          told = done
          setTimeout(done, 50)
        })
      }
      throw new Error(`no ${kind} came: ${JSON.stringify(news)}`)
    },
  }
}

describe('the events of a change', () => {
  let w: Walker
  let key: string
  let server: Server
  const open: Awaited<ReturnType<typeof follow>>[] = []
  const opened = async (person: SignedIn, page = 'values', change = key) => {
    const stream = await follow(`http://127.0.0.1:${(server.address() as AddressInfo).port}`, person, change, page)
    open.push(stream)
    return stream
  }

  beforeAll(async () => {
    w = await aWalker()
    key = await aDraft(w)
    await new Promise<void>((done) => (server = w.app.listen(0, '127.0.0.1', () => done())))
    await w.engineer.post(`/api/changes/${key}/writers`, { person: w.other.me.id }).expect(200)
  })
  afterEach(async () => {
    for (const stream of open.splice(0)) await stream.leave()
  })
  afterAll(() => void server.close())

  it('say who else has it open and on which page, as they come and go', async () => {
    const mine = await opened(w.engineer)
    expect((await mine.next('present')).people).toEqual([])
    const theirs = await opened(w.other)
    expect((await theirs.next('present')).people).toEqual([{ name: w.engineer.me.name, page: 'values' }])
    expect((await mine.next('present')).people).toEqual([{ name: w.other.me.name, page: 'values' }])
    const second = await opened(w.other, 'review')
    expect((await mine.next('present')).people).toEqual([{ name: w.other.me.name, page: 'values' }, { name: w.other.me.name, page: 'review' }])
    await second.leave()
    expect((await mine.next('present', (n) => n.people.length === 1)).people).toEqual([{ name: w.other.me.name, page: 'values' }])
    await theirs.leave()
    expect((await mine.next('present', (n) => n.people.length === 0)).people).toEqual([])
  })

  it('tell which values somebody saved, and the revision to read', async () => {
    const mine = await opened(w.engineer)
    await mine.next('present')
    const { body } = await w.other.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.2, to: 3.3 }] }).expect(200)
    expect(await mine.next('saved')).toEqual({ kind: 'saved', by: w.other.me.name, at: w.services.now().toISOString(), revision: body.revision, pointers: [gain] })
  })

  it('tell that it moved on, and that a comment was written; of a refused act nothing', async () => {
    const mine = await opened(w.engineer)
    await mine.next('present')
    await w.other.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 1, to: 2 }] }).expect(409)
    const view = await read(w.other, key)
    await w.other.patch(`/api/changes/${key}`, { title: 'Second numbers' }).set('If-Match', etag(view)).expect(200)
    expect(await mine.next('moved')).toMatchObject({ by: w.other.me.name, revision: view.revision + 1, state: 'draft' })
    await w.reviewer.post(`/api/changes/${key}/comments`, { text: 'Why?', on: { kind: 'change' } }).expect(201)
    expect(await mine.next('comment')).toMatchObject({ by: w.reviewer.me.name, comment: 1 })
    expect(mine.news.filter((n) => n.kind === 'saved')).toEqual([])
  })

  it('are of one change only, and of nobody who may not read it', async () => {
    const other = await aDraft(w, undefined, 'Another')
    const mine = await opened(w.engineer, 'values', other)
    expect((await mine.next('present')).people).toEqual([])
    await w.other.patch(`/api/changes/${key}/values`, { edits: [{ pointer: gain, from: 3.3, to: 3.4 }] }).expect(200)
    await w.engineer.patch(`/api/changes/${other}/values`, { edits: [{ pointer: gain, from: 3.2, to: 3 }] }).expect(200)
    expect((await mine.next('saved')).by).toBe(w.engineer.me.name)
    const stranger = await w.as([])
    await stranger.get(`/api/changes/${key}/events`).expect(404)
  })

  it('are held open by one person so many times and no more', async () => {
    const streams = await Promise.all(Array.from({ length: 16 }, () => opened(w.builder)))
    for (const s of streams) await s.next('present')
    expect([streams[0].status, streams[0].type]).toEqual([200, 'text/event-stream; charset=utf-8'])
    expect((await w.builder.get(`/api/changes/${key}/events`).expect(429)).body.detail).toContain('16')
    await streams[0].leave()
    await streams[1].next('present')
    expect((await opened(w.builder)).status).toBe(200)
  })
})
