import type { ErrorRequestHandler, RequestHandler } from 'express'
import type { Logger } from 'pino'
import { storageTrouble } from '../db/storage-errors.ts'
import { DomainError, toProblem } from './errors.ts'

type BodyError = Error & { type?: string; status?: number }

/** Errors of the body parser, in our words. */
function asDomainError(error: unknown): DomainError | null {
  if (error instanceof DomainError) return error
  const { type, status } = error as BodyError
  if (type === 'entity.parse.failed') return new DomainError('malformed-json', 'The body is not valid JSON. Nothing was saved.')
  if (type === 'entity.too.large') return new DomainError('body-too-large', 'The body is larger than this address takes. Nothing was saved.')
  if (type === 'encoding.unsupported' || type === 'charset.unsupported') return new DomainError('wrong-media-type', 'The body must be UTF-8 JSON. Nothing was saved.')
  if (error instanceof URIError || (status === 400 && error instanceof Error)) return new DomainError('invalid-request', 'The address or body could not be read. Nothing was done.')
  return null
}

/** What the disk refused, told so that it can be mended while the program runs on. */
function asStorageError(error: unknown): DomainError | null {
  const trouble = storageTrouble(error)
  if (trouble === 'full') return new DomainError('storage-full', 'The disk that holds the database is full. Nothing of this request was saved; everything saved before stands. Tell your administrator to make room, then do it again: no restart is needed.')
  if (trouble === 'failed') return new DomainError('storage-failed', 'The disk that holds the database could not be read or written. Nothing of this request was saved. Tell your administrator to look at the disk before anything else is done here.')
  return null
}

/** RFC 9457 for every error; unknown ones are logged in full and answered opaquely. */
export const errorHandler = (log: Logger): ErrorRequestHandler => (error, req, res, next) => {
  if (res.headersSent) return next(error)
  const requestId = String(req.id)
  const storage = asStorageError(error)
  if (storage) log.error({ err: error as Error, requestId }, 'the storage refused')
  const known = asDomainError(error) ?? storage
  if (!known) log.error({ err: error as Error, requestId }, 'unexpected error')
  const problem = toProblem(known ?? new DomainError('unexpected', `This failed inside Detent and was logged as ${requestId}. What was saved before stands; nothing of this request was. Try again, and tell your administrator if it stays.`), requestId)
  if (typeof problem.retryAfter === 'number') res.set('Retry-After', String(problem.retryAfter))
  res.status(problem.status).type('application/problem+json').set('Cache-Control', 'no-store').send(JSON.stringify(problem))
}

export const notFound: RequestHandler = (_req, _res, next) => next(new DomainError('not-found', 'There is nothing at this address. Check it; what you typed before is untouched.'))
