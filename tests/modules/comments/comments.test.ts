import { beforeAll, describe, expect, it } from 'vitest'
import { CommentAnswer } from '../../../server/modules/comments/comment-answer.entity.ts'
import { Comment } from '../../../server/modules/comments/comment.entity.ts'
import { Mail } from '../../../server/modules/mail/mail.entity.ts'
import type { CommentsView, CommentWritten, NamedView } from '../../../shared/contract/comments.ts'
import { aDraft, aWalker, etag, read, readAll, submitted, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import { password, type SignedIn } from '../../support/workplace.ts'

const gain = '/families/knee/values/velocityGain'
const whole = { kind: 'change' }

describe('comments on a change', () => {
  let w: Walker
  let key: string
  const write = (person: SignedIn, text: string, on: object = whole, more: object = {}) => person.post(`/api/changes/${key}/comments`, { text, on, ...more })
  const answer = (person: SignedIn, number: number | string) => person.post(`/api/changes/${key}/comments/${number}/answered`)
  const comments = async (person = w.reviewer) => (await person.get(`/api/changes/${key}/comments`).expect(200)).body as CommentsView
  const naming = async (person: SignedIn) => (await person.get('/api/comments/naming-me').expect(200)).body as NamedView[]
  const sign = async (status: number) => {
    const view = await read(w.reviewer, key)
    return w.reviewer.post(`/api/changes/${key}/sign`, { password, contentHash: view.contentHash }).set('If-Match', etag(view)).expect(status)
  }
  const mails = (to: SignedIn) => w.orm.em.fork().find(Mail, { to: to.me.email, subject: { $like: 'You are named%' } })

  beforeAll(async () => {
    w = await aWalker()
    key = await aDraft(w)
    await submitted(w, key)
    await readAll(w.reviewer, key)
  })

  it('are written to a value, in the words of its schema, and entered in the ledger', async () => {
    const { body } = (await write(w.reviewer, ' Heard on the bench?  ', { kind: 'value', pointer: gain }).expect(201)) as { body: CommentWritten }
    expect(body).toMatchObject({ written: 1, open: 1, comments: [{ number: 1, by: w.reviewer.me.name, roles: 'peer reviewer', text: 'Heard on the bench?', about: 'Velocity gain, Knee family', named: [], answered: null, may: { answer: { allowed: true } } }] })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'comment written', subject: { machine: 'dunlin', change: key }, details: { comment: 1, about: 'Velocity gain, Knee family', text: 'Heard on the bench?' } })
  })

  it('are written to a finding of the check', async () => {
    const { findings } = (await w.reviewer.get(`/api/changes/${key}/check`).expect(200)).body as { findings: { key: string; kind: string; loop?: string }[] }
    const [finding] = findings
    const { body } = (await write(w.manager, 'Since when?', { kind: 'finding', finding: finding.key }).expect(201)) as { body: CommentWritten }
    expect(body.comments[1]).toMatchObject({ on: { kind: 'finding', finding: finding.key }, about: expect.stringContaining(finding.kind) })
  })

  it.each([
    ['a place that is not there', { kind: 'value', pointer: '/families/hip/values/velocityGain' }, '/on/pointer'],
    ['a parameter that no version has', { kind: 'value', pointer: '/families/knee/values/nothing' }, '/on/pointer'],
    ['a place beyond a value', { kind: 'value', pointer: `${gain}/deeper` }, '/on/pointer'],
    ['the shape of every object', { kind: 'value', pointer: '/constructor/name' }, '/on/pointer'],
    ['a finding that is none', { kind: 'finding', finding: 'none' }, '/on/finding'],
  ])('are not hung on %s', async (_what, on, pointer) => {
    const refusal = await write(w.reviewer, 'Where?', on).expect(422)
    expect(refusal.body.errors).toMatchObject([{ pointer }])
    expect(refusal.body.detail).toContain('Nothing was written')
  })

  it.each([
    ['nothing', ''],
    ['only space', ' \n '],
    ['more than fits', 'x'.repeat(4001)],
    ['a NUL', 'a\u0000b'],
  ])('are not made of %s', async (_what, text) => void (await write(w.reviewer, text).expect(400)))

  it('are written by who may comment', async () => {
    expect((await comments(w.observer)).may.write.allowed).toBe(false)
    await write(w.observer, 'May I?').expect(403)
    expect((await comments(w.builder)).may.write).toEqual({ allowed: true })
  })

  it('name people: each is told once by mail, and finds it on their desk until they write under it', async () => {
    const [engineer, builder] = [w.engineer.me.name, w.builder.me.name]
    const { body } = (await write(w.reviewer, `@${engineer} and @${builder.toUpperCase()}, a log at rest? @${engineer}x @nobody ${w.observer.me.name} @${w.reviewer.me.name}`).expect(201)) as { body: CommentWritten }
    expect(body.comments.at(-1)!.named.toSorted()).toEqual([engineer, builder].toSorted())
    const [mail, ...others] = await mails(w.engineer)
    expect(others).toEqual([])
    expect(mail.subject).toBe('You are named: Dunlin 1, First numbers')
    expect(mail.text).toContain('a log at rest?')
    expect(mail.text).toContain(`/changes/${key}/review#comment-${body.written}`)
    expect(await mails(w.builder)).toHaveLength(1)
    expect(await mails(w.observer)).toEqual([])
    expect(await mails(w.reviewer)).toEqual([])
    expect(await naming(w.engineer)).toMatchObject([{ change: key, changeTitle: 'First numbers', comment: body.written, by: w.reviewer.me.name }])
    await write(w.engineer, 'Attached tomorrow.', whole, { under: body.written }).expect(201)
    expect(await naming(w.engineer)).toEqual([])
    expect(await naming(w.builder)).toHaveLength(1)
    expect((await lastEntries(w))[0].details).toMatchObject({ under: body.written })
  })

  it('do not name who may not read the machine', async () => {
    const stranger = await w.signIn(await w.person('Oda Brekke', []))
    const { body } = (await write(w.reviewer, '@Oda Brekke, look.').expect(201)) as { body: CommentWritten }
    expect(body.comments.at(-1)!.named).toEqual([])
    expect(await mails(stranger)).toEqual([])
    expect(await naming(stranger)).toEqual([])
    await answer(w.reviewer, body.written).expect(200)
  })

  it('stand under another one, where it hangs', async () => {
    const { body } = (await write(w.engineer, 'Faint, only at rest.', whole, { under: 1 }).expect(201)) as { body: CommentWritten }
    expect(body.comments.at(-1)).toMatchObject({ under: 1, on: { kind: 'value', pointer: gain }, about: 'Velocity gain, Knee family', may: { answer: { allowed: false } } })
    expect((await write(w.engineer, 'And more.', whole, { under: body.written }).expect(422)).body.errors).toMatchObject([{ pointer: '/under' }])
    await write(w.engineer, 'And more.', whole, { under: 999 }).expect(422)
    await answer(w.reviewer, body.written).expect(409)
  })

  it('keep the change from being signed while they are open, by number and name', async () => {
    const { open } = await comments()
    const refusal = await sign(409)
    expect(refusal.body).toMatchObject({ type: '/problems/wrong-state', comments: [1, 2, 3] })
    expect(open).toBe(3)
    expect(refusal.body.detail).toContain(`1, ${w.reviewer.me.name} on Velocity gain, Knee family`)
    expect((await read(w.reviewer, key)).signatures).toEqual([])
  })

  it('are marked answered by their writer or a reviewer, not by who wrote in the change', async () => {
    expect((await answer(w.engineer, 1).expect(403)).body.detail).toContain('or a reviewer marks it answered')
    expect((await answer(w.builder, 1).expect(403)).body.type).toBe('/problems/not-permitted')
    await answer(w.observer, 1).expect(403)
    await answer(w.reviewer, 'x').expect(404)
    await answer(w.reviewer, 77).expect(404)
    const { body } = (await answer(w.manager, 1).expect(200)) as { body: CommentsView }
    expect(body).toMatchObject({ open: 2, comments: expect.arrayContaining([expect.objectContaining({ number: 1, answered: { by: w.manager.me.name, at: w.services.now().toISOString() } })]) })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'comment answered', details: { comment: 1, by: w.reviewer.me.name } })
    expect((await answer(w.reviewer, 1).expect(409)).body.detail).toContain('answered already')
    expect((await write(w.engineer, 'One more.', whole, { under: 1 }).expect(409)).body.detail).toContain('answered')
    await answer(w.manager, 2).expect(200)
    await answer(w.reviewer, 3).expect(200)
    expect(await naming(w.builder)).toEqual([])
  })

  it("are answered by their own writer, the change's author included", async () => {
    const { body } = (await write(w.engineer, 'Is 3.2 A right for the new gear?').expect(201)) as { body: CommentWritten }
    await answer(w.engineer, body.written).expect(200)
  })

  it('are written once: neither text nor answer can be altered', async () => {
    const em = w.orm.em.fork()
    const [comment] = await em.find(Comment, {})
    comment.text = 'Something else.'
    await expect(em.flush()).rejects.toThrow('written once')
    for (const sql of ["update comment set text = 'x'", 'delete from comment', 'update comment_answer set at = 0', 'delete from comment_answer']) await expect(w.orm.em.getConnection().execute(sql)).rejects.toThrow('written once')
    expect(await w.orm.em.fork().count(CommentAnswer)).toBe(5)
  })

  it('no longer keep it from being signed; once it is released none is written', async () => {
    expect((await sign(200)).body.state).toBe('approved')
    await write(w.builder, 'Which boards first?').expect(201)
    await readAll(w.manager, key)
    const view = await read(w.manager, key)
    const release = () => w.manager.post(`/api/changes/${key}/release`, { password, contentHash: view.contentHash, version: '1.0.0' }).set('If-Match', etag(view))
    expect((await release().expect(409)).body.detail).toContain('One comment is not answered')
    await answer(w.builder, (await comments()).comments.at(-1)!.number).expect(200)
    await release().expect(201)
    expect((await write(w.reviewer, 'Well done.').expect(409)).body.detail).toContain('The change is released')
  })

  it('are read by nobody outside the machine', async () => {
    const stranger = await w.as([])
    await stranger.get(`/api/changes/${key}/comments`).expect(404)
    await stranger.post(`/api/changes/${key}/comments`, { text: 'x', on: whole }).expect(404)
  })

  it('are written once though the request is repeated', async () => {
    const other = await aDraft(w, undefined, 'Another')
    const post = () => w.reviewer.post(`/api/changes/${other}/comments`, { text: 'Once.', on: whole }).set('Idempotency-Key', 'the-same-comment')
    expect((await post().expect(201)).body).toEqual((await post().expect(201)).body)
    expect(((await w.reviewer.get(`/api/changes/${other}/comments`).expect(200)).body as CommentsView).comments).toHaveLength(1)
  })
})
