import { WriteComment, type CommentWritten } from '../../../shared/contract/comments.ts'
import { Nothing } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { tellOf } from '../changes/events.ts'
import { again, onChange } from '../changes/locate.ts'
import { markAnswered } from './mark-answered.ts'
import { placeWords } from './place-words.ts'
import { presentComments, presentNaming } from './present.ts'
import { writeComment } from './write-comment.ts'

export const commentRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/comments/naming-me',
    summary: 'list the comments that name the reader',
    access: 'signed-in',
    handle: async ({ em, person, held }) => ({ body: await presentNaming(em, person, held) }),
  }),
  route({
    method: 'get',
    path: '/changes/:change/comments',
    summary: 'read the comments of a change',
    access: 'read',
    place: onChange,
    handle: async ({ em, place, person, held }) => ({ body: await presentComments(em, place.change, person, held) }),
  }),
  route({
    method: 'post',
    path: '/changes/:change/comments',
    summary: 'comment on a change',
    access: 'comment',
    place: onChange,
    body: WriteComment,
    handle: async (call) => {
      const { services, em, place, person, held, body: request, now } = call
      const about = request.under === undefined ? await placeWords(services, em, place.change, request.on, person.id) : ''
      const answer = await call.act(async (tx) => {
        const change = await again(tx, place.change)
        const comment = await writeComment(tx, change, { request, about, person, held, baseUrl: services.config.baseUrl, now })
        const body: CommentWritten = { ...(await presentComments(tx, change, person, held)), written: comment.number }
        return { status: 201, body }
      })
      const { written } = (answer as { body: CommentWritten }).body
      tellOf(services, place.change.id, { kind: 'comment', by: person.name, at: now.toISOString(), comment: written })
      return answer
    },
  }),
  route({
    method: 'post',
    path: '/changes/:change/comments/:comment/answered',
    summary: 'mark a comment answered',
    access: 'comment',
    place: onChange,
    body: Nothing,
    handle: async (call) => {
      const { services, place, params, person, held, now } = call
      const number = /^[1-9]\d{0,8}$/.test(params.comment) ? Number(params.comment) : 0
      if (number === 0) throw new DomainError('not-found', 'A comment is named by its number. Nothing was marked.')
      const answer = await call.act(async (tx) => {
        const change = await again(tx, place.change)
        await markAnswered(tx, change, number, { person, held, now })
        return { body: await presentComments(tx, change, person, held) }
      })
      tellOf(services, place.change.id, { kind: 'comment', by: person.name, at: now.toISOString(), comment: number })
      return answer
    },
  }),
]
